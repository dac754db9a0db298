import { readFileSync } from 'node:fs';
import { describe, expect, test } from 'vitest';
import { LOOKS, SCHEMES } from '../../src/view/palette.ts';

/** Relative luminance and contrast: WCAG 2.2, definitions of "relative luminance" and "contrast ratio". */
function luminance(hex: string): number {
  const [r, g, b] = [1, 3, 5].map((i) => {
    const c = Number.parseInt(hex.slice(i, i + 2), 16) / 255;
    return c <= 0.04045 ? c / 12.92 : ((c + 0.055) / 1.055) ** 2.4;
  });
  return 0.2126 * r! + 0.7152 * g! + 0.0722 * b!;
}
const contrast = (a: number, b: number) => (Math.max(a, b) + 0.05) / (Math.min(a, b) + 0.05);

/** Least and greatest light that the copper's shader gives (`l` in materials.ts). */
const LIGHTS = [0.72, 0.86, 1];

describe('what the colours say', () => {
  test('out-of-focus red, fill and slashes, stands 3:1 in lightness off copper beside it, in any light', () => {
    for (const light of LIGHTS)
      for (const c of [LOOKS.focus.base, LOOKS.focus.mark])
        expect(contrast(light * luminance(LOOKS.reached.base), light * luminance(c))).toBeGreaterThanOrEqual(
          3,
        );
  });

  test('every reason has a colour and a pattern of its own, and the pattern can be seen on it', () => {
    const looks = Object.values(LOOKS);
    expect(new Set(looks.map((l) => l.base)).size).toBe(looks.length);
    expect(new Set(looks.map((l) => l.pattern)).size).toBe(looks.length);
    for (const l of looks)
      if (l.pattern !== 'plain' && l.pattern !== 'slashes')
        expect(contrast(luminance(l.base), luminance(l.mark)), l.words).toBeGreaterThanOrEqual(3);
  });

  test('copper’s rim and the selection stand 3:1 off the part in light and dark', () => {
    for (const s of Object.values(SCHEMES))
      expect(contrast(luminance(s.copperEdge), luminance(s.part))).toBeGreaterThanOrEqual(3);
    expect(contrast(luminance(SCHEMES.light.select), luminance(SCHEMES.light.part))).toBeGreaterThanOrEqual(
      3,
    );
  });

  test('the legend’s style sheet has the same colours', () => {
    const css = readFileSync(new URL('../../src/app/style.css', import.meta.url), 'utf8').replace(
      /\s+/g,
      ' ',
    );
    for (const [name, l] of Object.entries(LOOKS)) {
      expect(css, name).toContain(`.look-${name} .base { fill: ${l.base}; }`);
      if (l.pattern !== 'plain') expect(css, name).toContain(l.mark);
    }
  });
});

/**
 * Round a trace's end, places that are reached by way of a saddle vertex had arc length 0 instead of the end's. The
 * plan then took copper at the end for copper at the beginning, and left out a stretch that every layer could write.
 */
import { expect, test } from 'vitest';
import { quiet } from '../../src/core/base/run-context.ts';
import { at3 } from '../../src/core/base/vec.ts';
import { drapeElement, prepareDraper } from '../../src/core/drape/drape.ts';
import { loadPart } from '../../src/core/part/part.ts';
import { domeProject, domeStl } from '../flows/dome.ts';

test('the arc length of every place is that of the nearest place of the centre line, round the ends too', () => {
  const draper = prepareDraper(loadPart(domeStl(), 'dome.stl', 'mm', quiet));
  const trace = domeProject().circuit.elements[2]!;
  const { element } = drapeElement(draper, trace, '$', 'dome.drape.json');
  const { along, positions } = element!.field;
  const line = element!.path!.points;
  let worst = 0;
  for (let v = 0; v < along.length; v++) {
    // Oracle: the nearest place of the polyline in space; near a narrow strip it is the one over the surface.
    const p = at3(positions, v);
    let best = Infinity;
    let foot = 0;
    let walked = 0;
    for (let i = 0; i + 1 < line.length / 3; i++) {
      const [a, b] = [at3(line, i), at3(line, i + 1)];
      const long = Math.hypot(b[0] - a[0], b[1] - a[1], b[2] - a[2]);
      if (long === 0) continue;
      const t = Math.max(0, Math.min(1, a.reduce((n, x, k) => n + (p[k]! - x) * (b[k]! - x), 0) / long ** 2));
      const d = Math.hypot(...a.map((x, k) => p[k]! - x - t * (b[k]! - x)));
      if (d < best) [best, foot] = [d, walked + t * long];
      walked += long;
    }
    worst = Math.max(worst, Math.abs(along[v]! - foot));
  }
  // Past an end the arc length goes on by up to half the width and the patch's margin.
  expect(worst).toBeLessThan(0.7);
});

/** Numbers as people type them: "0.02in", "20 mil", "0,5", "1e-3 m". */

export type Quantity = 'length' | 'angle' | 'plain';

const FACTORS: Record<Quantity, Record<string, number>> = {
  length: {
    '': 1,
    mm: 1,
    cm: 10,
    m: 1000,
    um: 1e-3,
    µm: 1e-3,
    μm: 1e-3,
    nm: 1e-6,
    in: 25.4,
    inch: 25.4,
    '"': 25.4,
    mil: 0.0254,
    thou: 0.0254,
  },
  angle: { '': 1, deg: 1, '°': 1, rad: 180 / Math.PI },
  plain: { '': 1 },
};

export type Typed = { value: number } | { problem: string };

/**
 * @param own  unit that the field itself shows, such as "W": it may be typed, and changes nothing
 * @returns the number in mm, degrees or the field's own unit
 */
export function readNumber(text: string, quantity: Quantity, own = ''): Typed {
  const match = /^\s*([+\-−]?(?:\d+(?:[.,]\d*)?|[.,]\d+)(?:e[+-]?\d+)?)\s*(\S*)\s*$/i.exec(text);
  if (!match) return { problem: 'type a number' + (quantity === 'length' ? ', such as 0.5 or 0.02in' : '') };
  const number = Number(match[1]!.replace(',', '.').replace('−', '-'));
  const unit = match[2]!;
  const factor = unit === own ? 1 : (FACTORS[quantity][unit] ?? FACTORS[quantity][unit.toLowerCase()]);
  if (factor === undefined) {
    const known = [own, ...Object.keys(FACTORS[quantity])].filter(
      (u) => u !== '' && !/[μ"]|inch|thou/.test(u),
    );
    return {
      problem:
        `"${unit}" is no unit for this` + (known.length ? `; use ${[...new Set(known)].join(', ')}` : ''),
    };
  }
  // Short decimals stay short: 0.02 in is 0.508 mm, not 0.5079999999999999.
  return { value: Number((number * factor).toPrecision(12)) };
}

/** A number for reading: at most `digits` decimals, no trailing zeros, a true minus sign. */
export function show(value: number, digits = 2): string {
  if (!Number.isFinite(value)) return '–';
  const text = value
    .toFixed(digits)
    .replace(/(\.\d*?)0+$/, '$1')
    .replace(/\.$/, '');
  return (text === '-0' ? '0' : text).replace('-', '−');
}

/** With its sign, for offsets: +3.20, −1.00, 0.00. */
export function signed(value: number, digits = 2): string {
  const text = Math.abs(value).toFixed(digits);
  return Number(text) === 0 ? text : (value < 0 ? '−' : '+') + text;
}

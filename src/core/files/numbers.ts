/** Numbers in files: the same text on every machine. */

/** Four decimals, 0.1 µm; never "-0.0000". */
export function coordinate(x: number): string {
  const s = x.toFixed(4);
  return s === '-0.0000' ? '0.0000' : s;
}

/** Shortest text with at most six decimals. */
export const plainNumber = (x: number): string => String(Math.round(x * 1e6) / 1e6 + 0);

/** Rounded for a report: nine significant digits say more than any bench can measure, and hide the last bits of arithmetic. */
export const reportNumber = (x: number): number => (Number.isFinite(x) ? Number(x.toPrecision(9)) + 0 : 0);

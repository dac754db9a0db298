/** Plain tables for a terminal. */

/** Columns as wide as their widest cell; columns of numbers are set flush right. Indented by two spaces. */
export function table(head: readonly string[], rows: readonly (readonly string[])[]): string {
  const width = head.map((h, i) => Math.max(h.length, ...rows.map((r) => r[i].length)));
  const right = head.map(
    (_, i) => rows.length > 0 && rows.every((r) => /^[±+-]?[\d–]/.test(r[i]) || r[i] === ''),
  );
  const line = (cells: readonly string[]): string =>
    `  ${cells.map((c, i) => (right[i] ? c.padStart(width[i]) : c.padEnd(width[i]))).join('  ')}`.trimEnd();
  return [line(head), line(width.map((w) => '─'.repeat(w))), ...rows.map(line)].join('\n');
}

/** Names and values under each other. */
export function facts(rows: readonly (readonly [string, string])[]): string {
  const width = Math.max(...rows.map((r) => r[0].length));
  return rows.map(([name, value]) => `  ${name.padEnd(width)}  ${value}`).join('\n');
}

/** Number with `digits` decimals, never "-0". */
export function fixed(x: number, digits: number): string {
  const s = x.toFixed(digits);
  return /^-0(\.0*)?$/.test(s) ? s.slice(1) : s;
}

/** With its sign, for an offset to set. */
export const signed = (x: number, digits: number): string => {
  const s = fixed(x, digits);
  return s.startsWith('-') || /^0(\.0*)?$/.test(s) ? s : `+${s}`;
};

/** Whole number in groups of three. */
export const grouped = (n: number): string => String(n).replace(/\B(?=(\d{3})+$)/g, ' ');

/** Seconds as "45 s" or "3 min 05 s". */
export function duration(seconds: number): string {
  const s = Math.round(seconds);
  return s < 60 ? `${s} s` : `${Math.floor(s / 60)} min ${String(s % 60).padStart(2, '0')} s`;
}

export const counted = (n: number, one: string, many: string): string =>
  `${grouped(n)} ${n === 1 ? one : many}`;

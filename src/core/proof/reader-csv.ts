/** Reads a CSV scan file (job.md, "Scan files"); quoting by RFC 4180. */
import { InputError } from '../base/news.ts';
import { decodeUtf8 } from '../base/utf8.ts';
import { type BurnPath, burnPathBuilder } from './burn-path.ts';

const NEEDED = ['x_mm', 'y_mm', 'mark', 'speed_mm_s', 'power'] as const;

/**
 * Columns are found by their names, in whatever order; others are let pass.
 *
 * @throws InputError `bad-csv` with the line
 */
export function readCsv(bytes: Uint8Array, file: string): BurnPath {
  const text = decodeUtf8(bytes);
  const rows = rowReader(text, file);
  const header = rows.next();
  const column = NEEDED.map((name) => (header ?? []).findIndex((cell) => cell.trim() === name));
  column.forEach((c, i) => {
    if (c < 0) throw bad(file, 1, `the column ${NEEDED[i]} is missing`);
  });
  const [cx, cy, cm, cs, cp] = column;
  const path = burnPathBuilder(file);
  let first = true;
  for (let row = rows.next(); row; row = rows.next()) {
    if (row.length === 1 && row[0].trim() === '') continue; // a blank line
    const line = rows.line();
    const x = number(row[cx], file, line, 'x_mm');
    const y = number(row[cy], file, line, 'y_mm');
    const mark = number(row[cm], file, line, 'mark');
    if (mark !== 0 && mark !== 1) throw bad(file, line, `mark is ${row[cm]}, which is neither 0 nor 1`);
    if (mark === 1) {
      if (first) throw bad(file, line, 'the first move burns, but nothing says where it begins');
      const speed = number(row[cs], file, line, 'speed_mm_s');
      const power = number(row[cp], file, line, 'power');
      if (!(speed > 0)) throw bad(file, line, `a move that burns has the speed ${row[cs]}`);
      if (!(power >= 0)) throw bad(file, line, `power is ${row[cp]}`);
      path.add(x, y, true, speed, power);
    } else path.add(x, y, false, 0, 0);
    first = false;
  }
  return path.done();
}

const bad = (file: string, line: number, problem: string): InputError =>
  new InputError({
    code: 'bad-csv',
    file,
    place: `line ${line}`,
    problem,
    mend: 'write the scan files again',
  });

function number(cell: string | undefined, file: string, line: number, name: string): number {
  const value = cell === undefined || cell.trim() === '' ? Number.NaN : Number(cell);
  if (!Number.isFinite(value))
    throw bad(
      file,
      line,
      cell === undefined ? `${name} is missing` : `${name} is "${cell}", which is no number`,
    );
  return value;
}

/** Cells of one row after the other; a quoted cell may hold commas, doubled quotes and line ends. */
function rowReader(text: string, file: string) {
  let at = text.charCodeAt(0) === 0xfeff ? 1 : 0;
  let nextLine = 1;
  let line = 0;
  let quote = -1; // the next one, looked for again only when it is passed: most files have none
  return {
    /** Line on which the last row began. */
    line: () => line,
    next(): string[] | null {
      if (at >= text.length) return null;
      line = nextLine;
      let end = text.indexOf('\n', at);
      if (end < 0) end = text.length;
      if (quote < at) quote = text.indexOf('"', at);
      if (quote < 0) quote = Infinity;
      if (quote > end) {
        const row = text.slice(at, end > at && text[end - 1] === '\r' ? end - 1 : end).split(',');
        at = end + 1;
        nextLine++;
        return row;
      }
      const row: string[] = [];
      let cell = '';
      for (;;) {
        if (text[at] === '"') {
          for (at++; text[at] !== '"' || text[at + 1] === '"'; at++) {
            if (at >= text.length) throw bad(file, line, 'a quoted cell is not closed');
            if (text[at] === '"') at++;
            if (text[at] === '\n') nextLine++;
            cell += text[at];
          }
          at++;
        } else while (at < text.length && text[at] !== ',' && text[at] !== '\n') cell += text[at++];
        if (at < text.length && text[at] !== ',' && text[at] !== '\n' && text[at] !== '\r')
          throw bad(file, line, 'text follows a closing quote');
        if (text[at] === '\r') at++;
        row.push(cell.endsWith('\r') ? cell.slice(0, -1) : cell);
        cell = '';
        if (text[at] === ',') at++;
        else {
          at++;
          nextLine++;
          return row;
        }
      }
    },
  };
}

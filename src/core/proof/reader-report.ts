/** Reads from `report.json` what a person sets at the machine: the pose of each setup, the offset and files of each layer. */
import { InputError } from '../base/news.ts';
import type { Pose } from '../base/pose.ts';
import { decodeUtf8 } from '../base/utf8.ts';
import type { Vec3 } from '../base/vec.ts';

export interface ReportLayer {
  index: number;
  focusHeight: number;
  zOffset: number;
  zMoves: 'stage' | 'head';
  files: string[];
}

export interface ReportSetup {
  name: string;
  pose: Pose;
  layers: ReportLayer[];
}

/**
 * @throws InputError `bad-report` with the JSON path
 */
export function readReport(bytes: Uint8Array, file: string): ReportSetup[] {
  const bad = (place: string, problem: string): never => {
    throw new InputError({ code: 'bad-report', file, place, problem, mend: 'run the project again' });
  };
  let data: unknown;
  try {
    data = JSON.parse(decodeUtf8(bytes));
  } catch {
    bad('', 'the text is not valid JSON');
  }
  const object = (v: unknown, place: string): Record<string, unknown> =>
    typeof v === 'object' && v !== null && !Array.isArray(v)
      ? (v as Record<string, unknown>)
      : bad(place, 'an object is needed here');
  const list = (v: unknown, place: string): unknown[] =>
    Array.isArray(v) ? v : bad(place, 'a list is needed here');
  const text = (v: unknown, place: string): string =>
    typeof v === 'string' ? v : bad(place, 'a text is needed here');
  const number = (v: unknown, place: string): number =>
    typeof v === 'number' && Number.isFinite(v) ? v : bad(place, 'a number is needed here');
  const numbers = (v: unknown, count: number, place: string): number[] => {
    const all = list(v, place).map((n, i) => number(n, `${place}[${i}]`));
    return all.length === count ? all : bad(place, `${count} numbers are needed here`);
  };

  const root = object(data, '$');
  if (root['format'] !== 'beamdrape-report') bad('$.format', 'this is not a report');
  return list(root['setups'], '$.setups').map((s, i) => {
    const setup = object(s, `$.setups[${i}]`);
    const pose = object(setup['pose'], `$.setups[${i}].pose`);
    const rotate = numbers(pose['rotate'], 4, `$.setups[${i}].pose.rotate`) as [
      number,
      number,
      number,
      number,
    ];
    if (!(Math.hypot(...rotate) > 0)) bad(`$.setups[${i}].pose.rotate`, 'the quaternion is zero');
    return {
      name: text(setup['name'], `$.setups[${i}].name`),
      pose: { rotate, move: numbers(pose['move'], 3, `$.setups[${i}].pose.move`) as unknown as Vec3 },
      layers: list(setup['layers'], `$.setups[${i}].layers`).map((l, j) => {
        const place = `$.setups[${i}].layers[${j}]`;
        const layer = object(l, place);
        const zMoves = layer['zMoves'];
        return {
          index: number(layer['index'], `${place}.index`),
          focusHeight: number(layer['focusHeight'], `${place}.focusHeight`),
          zOffset: number(layer['zOffset'], `${place}.zOffset`),
          zMoves:
            zMoves === 'stage' || zMoves === 'head'
              ? zMoves
              : bad(`${place}.zMoves`, '"stage" or "head" is needed here'),
          files: list(layer['files'], `${place}.files`).map((f, k) => text(f, `${place}.files[${k}]`)),
        };
      }),
    };
  });
}

/** The command line as data. Everything wrong with it is an InputError: status 2, one line. */
import { parseArgs } from 'node:util';
import { InputError } from '../core/base/news.ts';
import { MM_PER_UNIT } from '../core/mesh/build.ts';
import type { ProofFormat } from '../core/proof/prove.ts';

export type ProgressMode = 'json' | 'bar' | 'lines' | 'none';
export type Units = keyof typeof MM_PER_UNIT;

export interface Settings {
  /** Null: a bar on a terminal, lines otherwise. */
  progress: ProgressMode | null;
  /** Null: as many as the computer runs at once. */
  threads: number | null;
  seed: number;
  /** Null: as the project says. */
  setups: number | null;
  timing: boolean;
}

export type Command =
  | { name: 'inspect'; part: string; units: Units; json: boolean; settings: Settings }
  | { name: 'run'; project: string; out: string; settings: Settings }
  | { name: 'check'; project: string; json: boolean; settings: Settings }
  | { name: 'prove'; dir: string; formats: ProofFormat[] | null; json: boolean; settings: Settings }
  | { name: 'demo'; out: string; settings: Settings }
  | { name: 'window'; args: string[] }
  | { name: 'help' }
  | { name: 'version' };

export const HELP = `beamdrape lays a circuit on a curved printed part and writes the scan files that a galvanometer
laser needs to burn it: one file for each focus height, proved by burning it on paper first.

  beamdrape inspect PART               read an STL file; what was found, what was mended
  beamdrape check PROJECT              what the beam reaches and what the shop rules say
  beamdrape run PROJECT --out DIR      all of it: scan files, report.json and sheet.html into DIR
  beamdrape prove DIR                  read the scan files of a run back and burn them on the model
  beamdrape demo --out DIR             run on the demonstration project
  beamdrape window [FILE]              open the window

  --json                 inspect, check, prove: JSON instead of a table
  --units UNIT           inspect: unit of the file, one of mm cm m um inch (mm)
  --formats LIST         prove: only these formats, as csv,svg
  --setups N             at most N setups where the project leaves them to the planner
  --seed N               for everything that is tried at random (1)
  --threads N            worker threads (as many as the computer runs at once)
  --progress MODE        json, bar, lines or none, on stderr (a bar on a terminal, else lines)
  --no-timing            no times in report.json, so that equal jobs give equal bytes
  --help, --version

Exit status: 0 done and every check holds, 1 done and some check fails, 2 bad input or bad usage,
3 a fault of the program, 130 stopped by Ctrl+C.
`;

const OPTIONS = {
  json: { type: 'boolean' },
  units: { type: 'string' },
  out: { type: 'string' },
  formats: { type: 'string' },
  setups: { type: 'string' },
  seed: { type: 'string' },
  threads: { type: 'string' },
  progress: { type: 'string' },
  'no-timing': { type: 'boolean' },
  help: { type: 'boolean', short: 'h' },
  version: { type: 'boolean' },
} as const;
type OptionName = keyof typeof OPTIONS;

const COMMON: OptionName[] = ['seed', 'threads', 'progress'];
/** What each command takes: number of operands and their name, and its own options. */
const COMMANDS: Record<string, { operand: string | null; options: OptionName[] }> = {
  inspect: { operand: 'PART', options: ['json', 'units', ...COMMON] },
  run: { operand: 'PROJECT', options: ['out', 'setups', 'no-timing', ...COMMON] },
  check: { operand: 'PROJECT', options: ['json', 'setups', ...COMMON] },
  prove: { operand: 'DIR', options: ['json', 'formats', ...COMMON] },
  demo: { operand: null, options: ['out', 'no-timing', ...COMMON] },
};

/** @throws InputError `usage` */
export function parseCommand(argv: readonly string[]): Command {
  if (argv[0] === 'window')
    return argv.includes('--help') ? { name: 'help' } : { name: 'window', args: argv.slice(1) };
  const { values, positionals } = parsed(argv);
  if (values.version) return { name: 'version' };
  if (values.help || positionals[0] === 'help') return { name: 'help' };
  const [name, ...operands] = positionals;
  if (name === undefined) throw usage('', 'no command was given', 'see "beamdrape --help" for the commands');
  const command = COMMANDS[name];
  if (!command)
    throw usage(
      '',
      `there is no command "${name}"`,
      `use one of ${Object.keys(COMMANDS).join(', ')} or window`,
    );
  for (const option of Object.keys(values) as OptionName[])
    if (!command.options.includes(option))
      throw usage(`--${option}`, `"${name}" takes no such option`, 'see "beamdrape --help"');
  if (command.operand !== null && operands.length === 0)
    throw usage(name, `${command.operand} is missing`, `give it, as "beamdrape ${name} ${command.operand}"`);
  if (operands.length > (command.operand === null ? 0 : 1))
    throw usage(
      name,
      `"${operands[command.operand === null ? 0 : 1]}" is one word too many`,
      'put names with spaces in quotes',
    );
  const settings: Settings = {
    progress: oneOf('progress', values.progress, ['json', 'bar', 'lines', 'none'] as const),
    threads: whole('threads', values.threads, 1, 256),
    seed: whole('seed', values.seed, 0, 2 ** 32 - 1) ?? 1,
    setups: whole('setups', values.setups, 1, 100),
    timing: !values['no-timing'],
  };
  const out = (): string => {
    if (values.out) return values.out;
    throw usage(name, '--out is missing', 'say where the files shall go, as "--out DIR"');
  };
  const json = values.json ?? false;
  switch (name) {
    case 'inspect': {
      const units = oneOf('units', values.units, Object.keys(MM_PER_UNIT) as Units[]) ?? 'mm';
      return { name, part: operands[0], units, json, settings };
    }
    case 'run':
      return { name, project: operands[0], out: out(), settings };
    case 'check':
      return { name, project: operands[0], json, settings };
    case 'prove':
      return { name, dir: operands[0], formats: formatsOf(values.formats), json, settings };
    default:
      return { name: 'demo', out: out(), settings };
  }
}

function parsed(argv: readonly string[]) {
  try {
    return parseArgs({ args: [...argv], options: OPTIONS, allowPositionals: true, strict: true });
  } catch (error) {
    const message = (error as Error).message;
    const option = /'(-[^' =]*)/.exec(message)?.[1] ?? '';
    if ((error as { code?: string }).code === 'ERR_PARSE_ARGS_UNKNOWN_OPTION')
      throw usage(option, 'there is no such option', 'see "beamdrape --help"');
    throw usage(option, 'the option is not used as it should be', 'see "beamdrape --help"');
  }
}

function oneOf<T extends string>(option: string, value: string | undefined, known: readonly T[]): T | null {
  if (value === undefined) return null;
  if ((known as readonly string[]).includes(value)) return value as T;
  throw usage(`--${option}`, `"${value}" is not known`, `use one of ${known.join(', ')}`);
}

function whole(option: string, value: string | undefined, least: number, most: number): number | null {
  if (value === undefined) return null;
  const n = Number(value);
  if (/^\d+$/.test(value) && n >= least && n <= most) return n;
  throw usage(`--${option}`, `"${value}" cannot be used`, `give a whole number from ${least} to ${most}`);
}

/** Formats that can be read back. */
export const FORMATS: readonly ProofFormat[] = ['svg', 'csv'];

function formatsOf(value: string | undefined): ProofFormat[] | null {
  if (value === undefined) return null;
  return value.split(',').map((f) => oneOf('formats', f.trim(), FORMATS) as ProofFormat);
}

const usage = (place: string, problem: string, mend: string): InputError =>
  new InputError({ code: 'usage', file: 'beamdrape', place, problem, mend });

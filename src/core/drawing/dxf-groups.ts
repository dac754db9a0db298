/**
 * DXF text to entities: pairs of lines, a group code and its value, sorted into header, layers, blocks and entities. The
 * parsers of the registry keep neither lines, hatches nor weights, and some hang on broken tables, so this room reads itself.
 */
import { InputError } from '../base/news.ts';
import { BadShape, tooLarge } from './findings.ts';

export interface Entity {
  type: string;
  /** Line of its group 0. */
  line: number;
  codes: number[];
  values: string[];
  /** VERTEX of a POLYLINE, ATTRIB of an INSERT. */
  parts: Entity[];
}

export interface Block {
  entities: Entity[];
  /** Point of the block that an INSERT puts at its place. */
  base: readonly [number, number];
}

export interface DxfFile {
  /** Value of $INSUNITS and its line; null where the header says none. */
  units: { value: number; line: number } | null;
  /** In order of the table; hidden: off or frozen. */
  layers: Map<string, { hidden: boolean }>;
  /** By name in capitals. */
  blocks: Map<string, Block>;
  entities: Entity[];
}

/** Characters. A polyline of a million points takes half of it. */
const MOST_TEXT = 100_000_000;
const MOST_ENTITIES = 300_000;

/** @throws InputError `not-dxf`, `binary-dxf`, `bad-group`, `truncated`, `too-large`, with the line */
export function readGroups(text: string, file: string): DxfFile {
  if (text.length > MOST_TEXT) throw tooLarge(file, '', `more than ${MOST_TEXT} characters`);
  const fail = (code: string, line: number, problem: string): InputError =>
    new InputError({ code, file, place: line > 0 ? `line ${line}` : '', problem, mend: MEND });
  if (text.slice(0, 64).includes('\0'))
    throw fail('binary-dxf', 0, 'this is binary DXF, and only DXF as text is read');
  const plain = text.charCodeAt(0) === 0xfeff ? text.slice(1) : text;
  const lines = plain.trimEnd().split(/\r\n|\n|\r/);
  const out: DxfFile = { units: null, layers: new Map(), blocks: new Map(), entities: [] };
  let section = '';
  let open: Entity | null = null;
  let owner: Entity | null = null;
  let block: (Block & { name: string }) | null = null;
  let header = '';
  let count = 0;
  let sections = 0;

  const begin = (type: string, line: number): void => {
    open = null;
    if (++count > MOST_ENTITIES) throw tooLarge(file, `line ${line}`, `more than ${MOST_ENTITIES} entities`);
    if (type === 'SEQEND') {
      owner = null;
      return;
    }
    open = { type, line, codes: [], values: [], parts: [] };
    if ((type === 'VERTEX' || type === 'ATTRIB') && owner) owner.parts.push(open);
    else {
      owner = type === 'POLYLINE' || type === 'INSERT' ? open : null;
      if (block) block.entities.push(open);
      else out.entities.push(open);
    }
  };
  const finishLayer = (): void => {
    if (open?.type !== 'LAYER') return;
    const field = fieldsOf(open);
    const name = field.text(2);
    if (name !== null)
      out.layers.set(name, { hidden: (field.whole(70, 0) & 1) === 1 || field.number(62, 0) < 0 });
  };
  const finishBlock = (): void => {
    if (open?.type !== 'BLOCK' || !block) return;
    const field = fieldsOf(open);
    block.name = (field.text(2) ?? '').toUpperCase();
    block.base = [field.number(10, 0), field.number(20, 0)];
  };

  for (let i = 0; i < lines.length; i += 2) {
    const line = i + 1;
    const head = lines[i].trim();
    if (!/^[+-]?\d{1,5}$/.test(head))
      throw fail(
        sections === 0 ? 'not-dxf' : 'bad-group',
        line,
        sections === 0 ? 'this is no DXF drawing' : `"${head.slice(0, 20)}" is no group code`,
      );
    if (i + 1 >= lines.length) throw fail('truncated', line, 'the text stops after a group code');
    const code = Number(head);
    const value = lines[i + 1].trim();
    if (code === 0) {
      try {
        finishLayer();
        finishBlock();
      } catch (error) {
        if (error instanceof BadShape)
          throw fail(error.code, (open as Entity | null)?.line ?? line, error.message);
        throw error;
      }
      const name = value.toUpperCase();
      if (name === 'EOF') {
        section = section === '' ? '' : 'EOF';
        break;
      }
      if (name === 'SECTION') {
        section = '?';
        sections++;
        open = owner = block = null;
      } else if (name === 'ENDSEC') {
        section = '';
        open = null;
      } else if (section === 'ENTITIES') begin(name, line);
      else if (section === 'BLOCKS') {
        if (name === 'BLOCK') {
          block = { name: '', entities: [], base: [0, 0] };
          open = { type: name, line, codes: [], values: [], parts: [] };
        } else if (name === 'ENDBLK') {
          if (block) out.blocks.set(block.name, block);
          open = owner = block = null;
        } else if (block) begin(name, line);
      } else if (section === 'TABLES')
        open = name === 'LAYER' ? { type: name, line, codes: [], values: [], parts: [] } : null;
    } else if (section === '?') {
      if (code === 2) section = value.toUpperCase();
    } else if (section === 'HEADER') {
      if (code === 9) header = value.toUpperCase();
      else if (header === '$INSUNITS' && code === 70) out.units = { value: Number(value), line: line + 1 };
    } else if (open !== null) {
      (open as Entity).codes.push(code);
      (open as Entity).values.push(value);
    }
  }
  if (sections === 0) throw fail('not-dxf', 1, 'this is no DXF drawing');
  if (section !== '') throw fail('truncated', lines.length, 'the text stops inside a section');
  return out;
}

const MEND = 'export the drawing again as DXF text';

export interface Fields {
  /** First value with this code; null where there is none. */
  text(code: number): string | null;
  /** @throws BadShape `bad-number`, also when it is missing and there is no `otherwise` */
  number(code: number, otherwise?: number): number;
  /** Bits and counts. @throws BadShape `bad-number` */
  whole(code: number, otherwise: number): number;
}

export function fieldsOf(entity: Entity): Fields {
  const text = (code: number): string | null => {
    const i = entity.codes.indexOf(code);
    return i < 0 ? null : entity.values[i];
  };
  const number = (code: number, otherwise?: number): number => {
    const value = text(code);
    if (value !== null) return numberOf(value, code);
    if (otherwise === undefined) throw new BadShape('bad-number', `${entity.type} has no group ${code}`);
    return otherwise;
  };
  return {
    text,
    number,
    whole(code, otherwise) {
      const value = number(code, otherwise);
      if (!Number.isInteger(value) || Math.abs(value) > 2 ** 31)
        throw new BadShape('bad-number', `group ${code} is ${value}, not a whole number`);
      return value;
    },
  };
}

/** @throws BadShape `bad-number` */
export function numberOf(text: string, code: number): number {
  const value = text === '' ? Number.NaN : Number(text);
  if (!Number.isFinite(value))
    throw new BadShape('bad-number', `"${text.slice(0, 20)}" in group ${code} is no number`);
  return value;
}

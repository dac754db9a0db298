/** Reading and writing project files, with every problem named by its JSON path. */
import { type ParseError, parse } from 'jsonc-parser';
import { InputError, type InputProblem } from '../base/news.ts';
import { type Project, projectSchema } from './schema.ts';

export interface ReadProject {
  project: Project;
  /** JSON paths of fields that this version does not know. They are kept on saving. */
  unknown: string[];
}

/**
 * @param text  the file's text
 * @param file  its name, for messages
 * @throws InputError with one problem a fault found: `not-json`, `not-a-project`, `newer-version`,
 *         `bad-value`, `same-id`, `bad-head`, `bad-range`
 */
export function readProject(text: string, file: string): ReadProject {
  const data = parseJson(text, file);
  if (typeof data !== 'object' || data === null || (data as { format?: unknown }).format !== 'beamdrape')
    throw new InputError({
      code: 'not-a-project',
      file,
      place: '$.format',
      problem: 'this is not a project file',
      mend: 'give a *.drape.json whose "format" is "beamdrape"',
    });
  const version = (data as { version?: unknown }).version;
  if (typeof version === 'number' && version > 1)
    throw new InputError({
      code: 'newer-version',
      file,
      place: '$.version',
      problem: `version ${version} is newer than this program knows (1)`,
      mend: 'open it with a newer release',
    });
  const parsed = projectSchema.safeParse(data);
  if (!parsed.success) {
    const problems = parsed.error.issues.map((issue): InputProblem => {
      const deep = deepest(issue as Issue, []);
      const value = valueAt(data, deep.path);
      const wants = deep.wants.join(' or ');
      return {
        code: 'bad-value',
        file,
        place: jsonPath(deep.path),
        problem: value === undefined ? 'a required value is missing' : `${show(value)} cannot stand here`,
        mend: value === undefined ? `add it (${wants})` : `give ${wants}`,
      };
    });
    throw new InputError(problems[0], ...problems.slice(1));
  }
  const project = parsed.data;
  const problems = cross(project, file);
  if (problems.length > 0) throw new InputError(problems[0], ...problems.slice(1));
  return { project, unknown: unknownFields(data, projectSchema as unknown as Described, []) };
}

/** Text of a project file; what was read comes out again, with unknown fields, in the schema's order. */
export const writeProject = (project: Project): string => JSON.stringify(project, null, 2) + '\n';

/** JSON path such as `$.circuit.elements[3].width`. */
export const jsonPath = (path: readonly PropertyKey[]): string =>
  '$' +
  path
    .map((k) =>
      typeof k === 'number'
        ? `[${k}]`
        : /^[A-Za-z_]\w*$/.test(String(k))
          ? `.${String(k)}`
          : `[${JSON.stringify(String(k))}]`,
    )
    .join('');

function parseJson(text: string, file: string): unknown {
  const plain = text.charCodeAt(0) === 0xfeff ? text.slice(1) : text;
  try {
    return JSON.parse(plain);
  } catch {
    const errors: ParseError[] = [];
    parse(plain, errors, { disallowComments: true });
    const before = plain.slice(0, errors[0]?.offset ?? plain.length).split('\n');
    throw new InputError({
      code: 'not-json',
      file,
      place: `line ${before.length}, column ${before[before.length - 1].length + 1}`,
      problem: 'the text is not valid JSON from here on',
      mend: 'look here for a comma, quote or bracket that is missing or too much',
    });
  }
}

interface Issue {
  code: string;
  path: PropertyKey[];
  message: string;
  errors?: Issue[][];
}

/** A union reports one list of issues an option: the options that came furthest say best what is wrong, together. */
function deepest(issue: Issue, prefix: PropertyKey[]): { path: PropertyKey[]; wants: string[] } {
  const path = [...prefix, ...issue.path];
  if (issue.code !== 'invalid_union' || !issue.errors?.length)
    return { path, wants: [wanted(issue.message)] };
  const inner = issue.errors.flatMap((option) => option.map((i) => deepest(i, path)));
  const depth = Math.max(...inner.map((d) => d.path.length));
  const furthest = inner.filter((d) => d.path.length === depth);
  const same = furthest.filter((d) => jsonPath(d.path) === jsonPath(furthest[0].path));
  return { path: furthest[0].path, wants: [...new Set(same.flatMap((d) => d.wants))] };
}

function valueAt(data: unknown, path: readonly PropertyKey[]): unknown {
  let v: unknown = data;
  for (const k of path) {
    if (typeof v !== 'object' || v === null) return undefined;
    v = (v as Record<PropertyKey, unknown>)[k];
  }
  return v;
}

const show = (v: unknown): string => {
  const s = JSON.stringify(v) ?? String(v);
  return s.length > 40 ? s.slice(0, 37) + '…' : s;
};

/** The validator's words in the person's: what may stand in the place. */
function wanted(message: string): string {
  const plain = message
    .replace(/\.$/, '')
    .replace(/^(Invalid input|Invalid option|Too small|Too big|Unrecognized key\w*): /, '')
    .replace(/^Invalid discriminator value\. Expected /, 'one of ')
    .replace(/^expected /, '')
    .replace(/, received .*$/, '')
    .replaceAll(/["']\s*\|\s*["']/g, '", "')
    .replaceAll("'", '"');
  const kinds: Record<string, string> = {
    number: 'a number',
    int: 'a whole number',
    string: 'text',
    boolean: 'true or false',
    array: 'a list',
    tuple: 'a list',
    object: 'an object { … }',
    record: 'an object { … }',
    null: 'null',
  };
  return (
    kinds[plain] ??
    plain
      .replace(/^(number|int) to be /, 'a number ')
      .replace(/^array to have >=(\d+) items$/, 'a list of $1 or more')
      .replace(/^string to have >=1 characters$/, 'text that is not empty')
  );
}

/** What no single field can see: ids used twice, a lens below its pivot, ranges the wrong way round. */
function cross(p: Project, file: string): InputProblem[] {
  const out: InputProblem[] = [];
  const seen = new Map<string, number>();
  p.circuit.elements.forEach((e, i) => {
    const first = seen.get(e.id);
    if (first !== undefined)
      out.push({
        code: 'same-id',
        file,
        place: `$.circuit.elements[${i}].id`,
        problem: `"${e.id}" is also the id of element ${first}`,
        mend: 'give each element an id of its own',
      });
    else seen.set(e.id, i);
  });
  p.head.pivot.forEach((v, i) => {
    if (v !== null && v <= p.head.workingDistance)
      out.push({
        code: 'bad-head',
        file,
        place: `$.head.pivot[${i}]`,
        problem: `the pivot at ${v} mm is not above the lens body, which begins at ${p.head.workingDistance} mm`,
        mend: 'give the pivot height above the focal plane, or null for a telecentric axis',
      });
  });
  if (p.material.damageFluence <= p.material.activationFluence * p.material.doseMargin)
    out.push({
      code: 'bad-range',
      file,
      place: '$.material.damageFluence',
      problem: 'damage begins below the dose that activation with its margin needs',
      mend: 'check activationFluence, doseMargin and damageFluence',
    });
  if (p.stage.range[0] >= p.stage.range[1])
    out.push({
      code: 'bad-range',
      file,
      place: '$.stage.range',
      problem: 'the range is empty',
      mend: 'give the lower offset first',
    });
  if (p.limits.depth.mode === 'distance' && p.limits.depth.halfDepth <= p.limits.heightUncertainty)
    out.push({
      code: 'bad-range',
      file,
      place: '$.limits.heightUncertainty',
      problem: `it takes the whole depth of focus (${p.limits.depth.halfDepth} mm)`,
      mend: 'lower the uncertainty or measure the depth again',
    });
  if (p.setups !== 'auto') {
    const names = new Set<string>();
    p.setups.forEach((s, i) => {
      if (names.has(s.name))
        out.push({
          code: 'same-id',
          file,
          place: `$.setups[${i}].name`,
          problem: `"${s.name}" is used twice`,
          mend: 'give each setup a name of its own',
        });
      names.add(s.name);
      s.focusHeights?.forEach((h, k) => {
        if (-h < p.stage.range[0] || -h > p.stage.range[1])
          out.push({
            code: 'bad-range',
            file,
            place: `$.setups[${i}].focusHeights[${k}]`,
            problem: `the stage cannot bring the height ${h} mm into focus`,
            mend: 'give a height whose opposite lies in stage.range',
          });
      });
    });
  }
  return out;
}

interface Described {
  def?: {
    type?: string;
    shape?: Record<string, Described>;
    element?: Described;
    innerType?: Described;
    options?: Described[];
    items?: Described[];
    in?: Described;
  };
}

/** Walks schema and data together and lists what the schema has no name for. */
function unknownFields(data: unknown, schema: Described | undefined, path: PropertyKey[]): string[] {
  const def = schema?.def;
  if (!def || typeof data !== 'object' || data === null) return [];
  if (def.innerType) return unknownFields(data, def.innerType, path);
  if (def.in) return unknownFields(data, def.in, path);
  if (def.options) {
    const found = def.options
      .map((o) => (fits(data, o) ? unknownFields(data, o, path) : null))
      .filter((x) => x !== null);
    return found.sort((a, b) => a.length - b.length)[0] ?? [];
  }
  if (def.type === 'array' && Array.isArray(data))
    return data.flatMap((v, i) => unknownFields(v, def.element, [...path, i]));
  if (def.type === 'object' && def.shape) {
    const shape = def.shape;
    return Object.entries(data).flatMap(([k, v]) =>
      k in shape ? unknownFields(v, shape[k], [...path, k]) : [jsonPath([...path, k])],
    );
  }
  return [];
}

/** Whether an option of a union is the one meant: its literal fields agree. */
function fits(data: object, option: Described): boolean {
  const shape = option.def?.shape;
  if (!shape) return option.def?.type === 'array' ? Array.isArray(data) : false;
  return Object.entries(shape).every(([k, s]) => {
    const d = s.def as { type?: string; values?: unknown[] } | undefined;
    return d?.type !== 'literal' || d.values?.includes((data as Record<string, unknown>)[k]);
  });
}

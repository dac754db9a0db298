/** Results in words and tables, for a person at the laser bench. */
import type { ElementReport, ProofReport, Report } from '../core/project/report.ts';
import { ruleWords } from '../core/project/rule-words.ts';
import type { Proof } from '../core/proof/prove.ts';
import { counted, duration, facts, fixed, grouped, signed, table } from './table.ts';

/** `inspect`: the part alone. */
export function showPart(file: string, part: Report['part'], trailingBytes: number): string {
  const size = [0, 1, 2].map((k) => fixed(part.bounds[1][k] - part.bounds[0][k], 2)).join(' × ');
  const corner = (k: 0 | 1): string => part.bounds[k].map((v) => fixed(v, 2)).join(', ');
  const rows: [string, string][] = [
    ['triangles', grouped(part.triangles)],
    ['vertices', grouped(part.vertices)],
    ['pieces', `${part.pieces}, ${part.closed ? 'all closed' : 'not all closed: the surface has borders'}`],
    ['size', `${size} mm`],
    ['from … to', `(${corner(0)}) … (${corner(1)})`],
    ['area', `${fixed(part.area, 1)} mm²`],
    [
      'volume',
      part.closed ? `${fixed(part.volume, 1)} mm³` : `${fixed(part.volume, 1)} mm³ in closed pieces`,
    ],
    ['mended', mendedWords(part.mended) || 'nothing'],
  ];
  if (trailingBytes > 0)
    rows.push(['not read', `${counted(trailingBytes, 'byte', 'bytes')} after the last facet`]);
  return `${file}\n${facts(rows)}\n`;
}

function mendedWords(m: Report['part']['mended']): string {
  const words: string[] = [];
  if (m.welded) words.push(`${counted(m.welded, 'vertex', 'vertices')} joined to a near one`);
  if (m.degenerate) words.push(`${counted(m.degenerate, 'facet', 'facets')} of no area left out`);
  if (m.duplicate) words.push(`${counted(m.duplicate, 'facet', 'facets')} drawn twice left out`);
  if (m.flipped) words.push(`${counted(m.flipped, 'facet', 'facets')} turned over`);
  if (m.split)
    words.push(`${counted(m.split, 'border edge', 'border edges')} split at a corner that lay there`);
  if (m.nonManifoldEdges)
    words.push(`${counted(m.nonManifoldEdges, 'edge', 'edges')} of more than two facets taken as borders`);
  return words.join(', ');
}

/** `check`: every element against every check, then the shop rules. */
export function showCheck(report: Report): string {
  const rows = report.elements.map((e) => [
    e.id,
    e.net || '–',
    fixed(e.length, 1),
    mark(e.incidence.ok, `${fixed(e.incidence.worst, 1)}°`),
    mark(e.shade.ok, `${fixed(100 * e.shade.share, 1)} %`),
    mark(e.field.ok, `${fixed(100 * e.field.worst, 0)} %`),
    mark(e.dose.ok, `${fixed(e.dose.min, 2)} … ${fixed(e.dose.max, 2)}`),
  ]);
  return [
    headline(report),
    ...unknownLines(report),
    '',
    rows.length
      ? table(['element', 'net', 'mm', 'angle', 'shaded', 'of field', 'dose J/cm²'], rows)
      : '  The circuit has no copper.',
    '',
    ...report.rules.flatMap((r) =>
      r.text && !CONNECTION.has(r.rule)
        ? [
            `${r.level}: ${r.elements.length ? `${r.elements.join(', ')}: ` : ''}${r.text} (at ${where(r.at)}).`,
          ]
        : [],
    ),
    ...drawingsBlock(report),
    ...netsBlock(report),
    rulesBlock(report),
    '',
  ].join('\n');
}

/** `run` and `demo`: the job in the order a person does it. */
export function showRun(report: Report, dir: string): string {
  const lines = [headline(report), ...unknownLines(report), ''];
  const mended = mendedWords(report.part.mended);
  const size = [0, 1, 2]
    .map((k) => fixed(report.part.bounds[1][k] - report.part.bounds[0][k], 1))
    .join(' × ');
  const spot = `${fixed(2 * report.beam.waistRadius_um, 0)} µm in focus${report.beam.truncated ? ', the beam is clipped by the aperture' : ''}`;
  lines.push(
    facts([
      [
        'part',
        `${counted(report.part.triangles, 'triangle', 'triangles')}, ${size} mm${mended ? `; mended: ${mended}` : ''}`,
      ],
      ['spot', spot],
      ['depth of focus', `±${fixed(report.beam.halfDepth, 2)} mm`],
    ]),
    '',
  );
  for (const setup of report.setups) lines.push(setupBlock(setup), '');
  lines.push(...drawingsBlock(report), ...netsBlock(report));
  lines.push(unwritten(report), '', rulesBlock(report), '', proofBlock(report.proof), '');
  lines.push(`Job sheet: ${dir.replace(/\/$/, '')}/sheet.html`, '');
  return lines.join('\n');
}

function headline(report: Report): string {
  const layers = report.setups.reduce((n, s) => n + s.layers.length, 0);
  const what = layers > 0 ? `${counted(layers, 'focus layer', 'focus layers')}; ` : '';
  return `${report.project}: ${what}${report.ok ? 'every check holds' : 'NOT EVERY CHECK HOLDS'}.`;
}

const unknownLines = (report: Report): string[] => [
  ...(report.unknownFields.length
    ? [`Not understood, kept as they are: ${report.unknownFields.join(', ')}.`]
    : []),
  ...(report.drawings ?? []).flatMap((d) =>
    d.notes.map(
      (n) =>
        `${d.file}, ${n.place}: ${n.text.replace(/\.$/, '')}${n.count > 1 ? ` (${n.count} times)` : ''}.`,
    ),
  ),
];

function setupBlock(setup: Report['setups'][number]): string {
  if (setup.layers.length === 0) return `Setup "${setup.name}" has nothing to write.`;
  const moves = setup.layers[0].zMoves;
  const up =
    moves === 'stage'
      ? 'positive lifts the part toward the head'
      : 'positive lifts the head away from the part';
  const rows = setup.layers.map((l) => [
    String(l.index),
    signed(l.zOffset, 3),
    `${fixed(l.heights[0], 2)} … ${fixed(l.heights[1], 2)}`,
    fixed(l.worstDefocus, 2),
    fixed(l.copperArea, 1),
    fixed(l.markLength, 0),
    duration(l.time),
    l.files[0] ?? '',
  ]);
  return [
    `Setup "${setup.name}": the ${moves} moves; ${up}.`,
    table(['layer', 'set Z mm', 'copper at heights', 'defocus', 'mm²', 'mark mm', 'time', 'file'], rows),
  ].join('\n');
}

/** Each drawing with what the surface does to its lengths at the worst place. */
function drawingsBlock(report: Report): string[] {
  const rows = (report.drawings ?? []).map((d) => {
    const own = report.elements.filter((e) => e.id.startsWith(`${d.drape}/`));
    const worst = own.reduce<ElementReport | null>((w, e) => (w && w.stretch >= e.stretch ? w : e), null);
    const { along, across, at } = worst?.stretched ?? {};
    const percent = (ratio: number | undefined) =>
      ratio === undefined ? '' : `${signed(100 * (ratio - 1), 1)} %`;
    return [d.drape, d.file, String(own.length), worst?.id ?? '', percent(along), percent(across), where(at)];
  });
  if (rows.length === 0) return [];
  const head = ['drawing', 'file', 'elements', 'stretched most', 'along', 'across', 'at x, y, z'];
  return [`Drawings:\n${table(head, rows)}`, ''];
}

function netsBlock(report: Report): string[] {
  const rows = report.nets.map((n) => {
    const most = n.resistance_mohm.reduce<(typeof n.resistance_mohm)[number] | null>(
      (m, r) => (m && m.value >= r.value ? m : r),
      null,
    );
    return [
      n.name,
      String(n.pieces),
      fixed(n.length, 1),
      fixed(n.area, 1),
      most ? fixed(most.value, 0) : '–',
      most ? `${most.from} – ${most.to}` : '',
      n.current_A > 0 ? fixed(n.current_A, 2) : '–',
    ];
  });
  if (rows.length === 0) return [];
  const head = ['net', 'pieces', 'traces mm', 'mm²', 'mΩ at most', 'between', 'A (guide)'];
  return [`Nets:\n${table(head, rows)}`, ''];
}

function unwritten(report: Report): string {
  const rows: string[][] = [];
  for (const c of report.collisions)
    rows.push([
      `layer ${c.layer}`,
      `the part would meet the lens: it stands ${fixed(c.height, 2)} mm above the focal plane`,
      where(c.at),
    ]);
  for (const e of report.elements)
    for (const [reason, at] of reasons(e)) rows.push([e.id, reason, where(at)]);
  for (const r of report.rules)
    if (r.text && !CONNECTION.has(r.rule)) rows.push([r.elements.join(', '), r.text, where(r.at)]);
  for (const id of report.unreached.elements)
    if (!rows.some((r) => r[0] === id)) rows.push([id, 'no layer reaches all of it', '']);
  if (rows.length === 0) return 'Everything can be written.';
  const lost =
    report.unreached.length > 0 ? ` (${fixed(report.unreached.length, 1)} mm are in no layer)` : '';
  return `Cannot be written as drawn${lost}:\n${table(['element', 'why', 'worst at x, y, z'], rows)}`;
}

function reasons(e: ElementReport): [string, readonly number[] | undefined][] {
  const out: [string, readonly number[] | undefined][] = [];
  if (!e.focus.ok) out.push([`out of focus: ${fixed(e.focus.worst, 2)} mm off`, e.focus.at]);
  if (!e.incidence.ok) out.push([`too oblique: ${fixed(e.incidence.worst, 1)}°`, e.incidence.at]);
  if (!e.shade.ok) out.push([`shaded: ${fixed(100 * e.shade.share, 1)} % of its area`, e.shade.at]);
  if (!e.field.ok)
    out.push([`outside the field: ${fixed(100 * e.field.worst, 0)} % of half its width`, e.field.at]);
  if (!e.dose.ok) out.push([`dose ${fixed(e.dose.min, 2)} … ${fixed(e.dose.max, 2)} J/cm²`, e.dose.at]);
  return out;
}

/** What copper joins: told in words, and nothing that cannot be written. */
const CONNECTION = new Set(['open', 'short']);

function rulesBlock(report: Report): string {
  const told = report.rules.filter((r) => !r.text || CONNECTION.has(r.rule));
  if (told.length === 0) return 'Shop rules: nothing to say.';
  const rows = told.map((r) => [r.level, r.rule, ruleWords(r), r.elements.join(', '), where(r.at)]);
  return `Shop rules:\n${table(['level', 'rule', 'what', 'elements', 'at x, y, z'], rows)}`;
}

function proofBlock(p: ProofReport | null): string {
  if (!p) return 'Proof: there are no files to prove.';
  return `Proof: burnt on the model, the files ${p.ok ? 'give the drawn copper' : 'DO NOT GIVE THE DRAWN COPPER'}.\n${proofFacts(p)}`;
}

function proofFacts(p: ProofReport): string {
  const names = (groups: readonly string[][]): string =>
    groups.length ? groups.map((g) => g.join(' – ')).join('; ') : 'none';
  return facts([
    ['files read back', String(p.files)],
    [
      'covered',
      `${fixed(100 * p.covered, 2)} %${p.coveredElement ? ` of ${p.coveredElement}, the least covered` : ''}`,
    ],
    ['in focus', `${fixed(100 * p.focus, 2)} % of what is written`],
    ['stray', `${fixed(p.stray_mm2, 3)} mm²`],
    ['opens', names(p.opens)],
    ['shorts', names(p.shorts)],
    ...p.findings.map((f): [string, string] => ['wrong', f]),
  ]);
}

/** `prove`: the verdict of each format. @param absent  formats that the run wrote and that were not proved now */
export function showProof(dir: string, proof: Proof, absent: readonly string[]): string {
  const head = `${dir}: burnt on the model, the files ${proof.report.ok ? 'give the drawn copper' : 'DO NOT GIVE THE DRAWN COPPER'}.`;
  const parts = proof.byFormat.map(
    ({ format, report }) =>
      `${format.toUpperCase()}: ${report.ok ? 'holds' : 'FAILS'}\n${proofFacts(report)}`,
  );
  if (parts.length === 0) parts.push(...proof.report.findings);
  parts.push(...absent.map((f) => `${f.toUpperCase()}: written by the run, not looked at now`));
  return `${[head, ...parts].join('\n\n')}\n`;
}

const mark = (ok: boolean, text: string): string => (ok ? text : `${text} !`);
const where = (at: readonly number[] | undefined): string =>
  at ? at.map((v) => fixed(v, 1)).join(', ') : '';

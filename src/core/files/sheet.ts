/**
 * The job sheet: one HTML file that opens alone, in the order in which a person works at the machine. It draws each
 * layer from its strokes, and shows the usual cautions without ever giving a number as a safety limit.
 */
import type { Report, SetupReport } from '../project/report.ts';
import { ruleWords } from '../project/rule-words.ts';
import type { Project } from '../project/schema.ts';
import type { LayerScan } from '../scan/strokes.ts';
import { CAUTIONS } from './cautions.ts';
import { extentOf, layerPicture, setupGhost } from './layer-picture.ts';
import { SHEET_STYLE } from './sheet-style.ts';

export interface SheetSetup {
  report: SetupReport;
  scans: readonly LayerScan[];
}

export function jobSheet(project: Project, report: Report, setups: readonly SheetSetup[]): string {
  const title = `${project.name} – job sheet`;
  return (
    [
      '<!DOCTYPE html>',
      '<html lang="en"><head><meta charset="utf-8">',
      '<meta name="viewport" content="width=device-width, initial-scale=1">',
      `<title>${text(title)}</title>`,
      `<style>${SHEET_STYLE}</style></head><body>`,
      `<header><h1>${text(project.name)}</h1>${verdict(report)}</header>`,
      cautions(),
      before(project, report),
      ...setups.map((s, i) => setupSection(project, s, i, setups.length)),
      after(report),
      notWritten(report),
      '</body></html>',
    ].join('\n') + '\n'
  );
}

function verdict(report: Report): string {
  const p = report.proof;
  const proof = p
    ? p.ok
      ? `The files were read back and burnt virtually: ${percent(p.covered)} of the least covered element is activated, nothing strays, no opens, no shorts.`
      : 'The read-back proof FAILED. Do not burn these files before you know why.'
    : 'The files were not proved.';
  return `<p class="${report.ok ? 'good' : 'bad'}"><strong>${report.ok ? 'Every check holds.' : 'Some check fails: see the last section.'}</strong> ${text(proof)}</p>`;
}

const cautions = (): string =>
  `<section class="care"><h2>Before anything else</h2><ul>${CAUTIONS.map((c) => `<li><strong>${text(c.word)}</strong> ${text(c.text)}</li>`).join('')}</ul></section>`;

function before(project: Project, report: Report): string {
  const { head } = project;
  const b = report.beam;
  const rows: [string, string][] = [
    ['Part file', `${project.part.file} (${project.part.units})`],
    ['Lens', `f = ${n(head.focalLength)} mm, field ${n(head.field[0])} × ${n(head.field[1])} mm`],
    [
      'Source',
      `${n(head.wavelength_nm)} nm, ${n(head.averagePower_W)} W at the part, ${n(head.repetitionRate_kHz)} kHz, ${n(head.pulseWidth_ns)} ns`,
    ],
    [
      'Spot at best focus',
      `${n(2 * b.waistRadius_um, 1)} µm (1/e² diameter)${b.truncated ? ', clipped by the aperture' : ''}`,
    ],
    [
      'Depth used',
      `±${n(b.halfDepth - project.limits.heightUncertainty, 2)} mm (±${n(b.halfDepth, 2)} mm less ${n(project.limits.heightUncertainty, 2)} mm for print and placing)`,
    ],
    ['Moves in Z', zMoves(project)],
  ];
  return `<section><h2>1. Check the machine against these</h2><table class="facts">${rows.map(([a, v]) => `<tr><th>${text(a)}</th><td>${text(v)}</td></tr>`).join('')}</table></section>`;
}

const zMoves = (project: Project): string =>
  project.stage.zMoves === 'stage'
    ? 'the stage; positive lifts the part toward the head'
    : 'the head; positive lifts the head away from the part';

function setupSection(project: Project, setup: SheetSetup, i: number, of: number): string {
  const { report } = setup;
  const ghost = `setup-${i + 1}`;
  const view = extentOf(...setup.scans);
  const layers = report.layers.map((layer, k) => {
    const scan = setup.scans[k];
    const classes = layer.classes
      .map(
        (c, j) =>
          `<tr><td>${j + 1}</td><td>${n(c.speed, 1)} mm/s</td><td>${n(100 * c.power, 1)} %</td><td>${c.passes}</td></tr>`,
      )
      .join('');
    return `<article class="layer">
<h3><span class="box" aria-hidden="true"></span> Layer ${layer.index}: set Z to <span class="z">${signed(layer.zOffset)} mm</span></h3>
<div class="two"><div>
<p>${text(project.stage.zMoves === 'stage' ? 'The stage moves; + is up, toward the head.' : 'The head moves; + is up, away from the part.')}
In focus: copper at bench height ${signed(layer.focusHeight)} mm. This layer writes heights ${signed(layer.heights[0])} to ${signed(layer.heights[1])} mm, at most ${n(layer.worstDefocus, 2)} mm out of focus.</p>
<p>Burn <strong>one</strong> of: ${layer.files.map((f) => `<code>${text(f)}</code>`).join(' or ')}</p>
<table class="classes"><tr><th>class</th><th>mark speed</th><th>power</th><th>passes</th></tr>${classes}</table>
<p>${n(layer.copperArea, 2)} mm² of copper · ${n(layer.markLength, 0)} mm of strokes · ${n(layer.jumpLength, 0)} mm of jumps · about ${duration(layer.time)}</p>
</div>${layerPicture(scan, view, project.head, ghost, `Strokes of layer ${layer.index}`)}</div></article>`;
  });
  return `<section><h2>${i + 2}. Setup “${text(report.name)}”${of > 1 ? ` (${i + 1} of ${of})` : ''}</h2>
${setupGhost(setup.scans, ghost)}
<p>${text(poseSentence(report))} The bench’s +Z runs up the optical axis, with zero in the focal plane while the stage stands at offset 0; its +X and +Y are the scan field’s axes.</p>
<p>Write the layers in this order, each after setting its Z with the laser off.</p>
${layers.join('\n')}</section>`;
}

function poseSentence(report: SetupReport): string {
  const [x, y, z, w] = report.pose.rotate;
  const angle = (2 * Math.atan2(Math.hypot(x, y, z), w) * 180) / Math.PI;
  const move = report.pose.move.map((v) => signed(v)).join(', ');
  const l = Math.hypot(x, y, z);
  if (l < 1e-9) return `Take the part as its file has it, not turned, and move it by (${move}) mm.`;
  return `Take the part as its file has it, turn it by ${n(angle, 2)}° about the axis (${n(x / l, 3)}, ${n(y / l, 3)}, ${n(z / l, 3)}), then move it by (${move}) mm.`;
}

function after(report: Report): string {
  const p = report.plating;
  return `<section><h2>After the last layer</h2><p>Clean the part, then plate: ${n(p.area_dm2, 3)} dm² of copper (${n(p.load, 2)} dm²/L), about ${n(p.time_min, 0)} minutes, ${n(p.copper_g * 1000, 1)} mg of copper. Rate and load are this project’s own numbers; the bath’s data sheet decides.</p></section>`;
}

function notWritten(report: Report): string {
  const rows = report.elements
    .map((e) => ({ id: e.id, why: reasons(e) }))
    .filter((e) => e.why.length > 0)
    .map((e) => `<tr><th>${text(e.id)}</th><td>${text(e.why.join('; '))}</td></tr>`);
  const rules = report.rules
    .filter((r) => r.level === 'error')
    .map((r) => `<tr><th>${text(r.elements.join(', '))}</th><td>${text(ruleWords(r))}</td></tr>`);
  const p = report.proof;
  const proof =
    p && !p.ok
      ? [
          ...p.opens.map((o) => `<tr><th>${text(o.join(' – '))}</th><td>open after burning</td></tr>`),
          ...p.shorts.map((o) => `<tr><th>${text(o.join(' – '))}</th><td>shorted after burning</td></tr>`),
          ...(p.findings ?? []).map((f) => `<tr><th>files</th><td>${text(f)}</td></tr>`),
        ]
      : [];
  const all = [...rows, ...rules, ...proof];
  return all.length === 0
    ? ''
    : `<section><h2>What does not hold</h2><table class="facts">${all.join('')}</table></section>`;
}

function reasons(e: Report['elements'][number]): string[] {
  const out: string[] = [];
  if (!e.focus.ok) out.push(`out of focus by up to ${n(e.focus.worst, 2)} mm`);
  if (!e.incidence.ok) out.push(`too oblique, up to ${n(e.incidence.worst, 1)}°`);
  if (!e.shade.ok) out.push(`${percent(e.shade.share)} of it shaded`);
  if (!e.field.ok) out.push(`off the field (${n(e.field.worst, 2)} of half the field)`);
  if (!e.dose.ok) out.push(`fluence ${n(e.dose.min, 2)} to ${n(e.dose.max, 2)} J/cm²`);
  return out;
}

const n = (x: number, digits = 2): string => String(Number(x.toFixed(digits)) + 0);
const signed = (x: number): string => `${x > 0 ? '+' : x < 0 ? '−' : ''}${Math.abs(x).toFixed(2)}`;
const percent = (x: number): string => `${(100 * x).toFixed(2)} %`;
const duration = (s: number): string =>
  s < 90 ? `${Math.ceil(s)} s` : `${Math.floor(s / 60)} min ${Math.round(s % 60)} s`;
const text = (s: string): string =>
  s.replaceAll('&', '&amp;').replaceAll('<', '&lt;').replaceAll('>', '&gt;').replaceAll('"', '&quot;');

/** The demonstration, from files to files and back, and what the proof says when somebody has been at them. */
import { readFileSync } from 'node:fs';
import { beforeAll, describe, expect, it } from 'vitest';
import { quiet } from '../../src/core/base/run-context.ts';
import { decodeUtf8, encodeUtf8 } from '../../src/core/base/utf8.ts';
import type { Copper } from '../../src/core/drape/copper.ts';
import { drapeCircuit } from '../../src/core/drape/drape.ts';
import { checkPlan } from '../../src/core/layers/check-plan.ts';
import { planLayers } from '../../src/core/layers/plan-layers.ts';
import { type JobInput, type JobResult, loadPart, readDrawings, runJob } from '../../src/core/pipeline.ts';
import { readProject } from '../../src/core/project/read.ts';
import type { ProofReport } from '../../src/core/project/report.ts';
import type { Setup } from '../../src/core/project/schema.ts';
import { type ProofFormat, prove } from '../../src/core/proof/prove.ts';
import { checkReach } from '../../src/core/reach/reach.ts';
import { createPool } from '../../src/worker/pool.ts';
import { tasks } from '../../src/worker/tasks.ts';
import { flatForTests } from './helpers/flat.ts';

const folder = new URL('../../assets/demo/', import.meta.url);
const text = readFileSync(new URL('touch-dial.drape.json', folder), 'utf8');
const bytes = readFileSync(new URL('dial.stl', folder));
const { project } = readProject(text, 'touch-dial.drape.json');
const drawings = ['electrodes.svg', 'tail.gbr'].map((file) => ({
  file,
  bytes: Uint8Array.from(readFileSync(new URL(file, folder))),
}));
const input: JobInput = {
  project,
  projectFile: 'touch-dial.drape.json',
  projectText: text,
  part: { file: 'dial.stl', bytes },
  drawings,
  flat: flatForTests,
};
const inline = createPool(1, tasks, () => {
  throw new Error('one thread needs no other');
});

describe('the touch dial', () => {
  let job: JobResult;
  const part = loadPart(bytes, 'dial.stl', 'mm', quiet);
  let copper: Copper;
  beforeAll(async () => {
    const read = await readDrawings(project, drawings, flatForTests, quiet);
    copper = drapeCircuit(project, 'x', part, quiet, read).copper;
    job = await runJob(input, { seed: 1 }, quiet, inline);
  });

  it('every check holds, the proof is clean, and it takes four layers or more', () => {
    const { report } = job;
    expect(report.ok).toBe(true);
    expect(report.rules).toEqual([]);
    expect(report.unreached.length).toBe(0);
    expect(report.setups[0].layers.length).toBeGreaterThanOrEqual(4);
    expect(report.proof!.covered).toBeGreaterThanOrEqual(0.995);
    expect(report.proof).toMatchObject({
      ok: true,
      focus: 1,
      stray_mm2: 0,
      opens: [],
      shorts: [],
      findings: [],
    });
    for (const e of report.elements) expect(e.incidence.worst).toBeLessThanOrEqual(57);
  });

  it('Z falls as the focus height rises, on the grid of the stage', () => {
    const { layers } = job.report.setups[0];
    layers.forEach((l, i) => {
      expect(l.zOffset).toBeCloseTo(-l.focusHeight, 9);
      expect(Math.abs(l.zOffset * 100 - Math.round(l.zOffset * 100))).toBeLessThan(1e-6);
      if (i > 0) expect(l.zOffset).toBeLessThan(layers[i - 1].zOffset);
    });
  });

  it('its plan keeps the invariants of a plan', () => {
    const setups = project.setups as Setup[];
    const reach = checkReach(project, setups, part, copper, quiet);
    const plans = planLayers(project, setups, copper, reach, quiet);
    expect(checkPlan(project, copper, reach[0], plans[0])).toEqual([]);
    // And the checker sees a plan that does not.
    const broken = structuredClone(plans[0]);
    broken.layers[1].focusHeight += 0.5;
    expect(checkPlan(project, copper, reach[0], broken).length).toBeGreaterThan(0);
  });

  it('the same job gives the same bytes', async () => {
    const again = await runJob(input, { seed: 1 }, quiet, inline);
    expect(again.files.map((f) => f.path)).toEqual(job.files.map((f) => f.path));
    again.files.forEach((f, i) => {
      expect(Buffer.compare(Buffer.from(f.bytes), Buffer.from(job.files[i].bytes)), f.path).toBe(0);
    });
  });

  /** Proof after a change of the files, by path; null takes a file away. */
  const proveWith = (
    format: ProofFormat,
    change: (path: string, content: string) => string | null,
  ): ProofReport => {
    const files = job.files.flatMap((f) => {
      const content = change(f.path, decodeUtf8(f.bytes));
      return content === null ? [] : [{ path: f.path, bytes: encodeUtf8(content) }];
    });
    return prove({ project, mesh: part.mesh, normals: part.normals, copper, files, formats: [format] }, quiet)
      .report;
  };
  const eachRow = (csv: string, move: (x: number, y: number) => [number, number]): string =>
    csv.replace(/^(-?[\d.]+),(-?[\d.]+),/gm, (_, x, y) => {
      const [a, b] = move(Number(x), Number(y));
      return `${a.toFixed(4)},${b.toFixed(4)},`;
    });

  it.each(['csv', 'svg'] as const)('%s alone passes when nothing was changed', (format) => {
    expect(proveWith(format, (_, c) => c).ok).toBe(true);
  });

  it('other number formatting and another order of strokes change nothing', () => {
    const report = proveWith('svg', (path, c) => {
      if (!path.endsWith('.svg')) return c;
      const lines = c.split('\n');
      // Strokes of one group stay in it: each group is turned round by itself.
      const groups: string[][] = [[]];
      for (const l of lines) {
        if (l.startsWith('<polyline')) groups[groups.length - 1].push(l);
        else groups.push([]);
      }
      let g = 0;
      const out: string[] = [];
      for (const l of lines) if (!l.startsWith('<polyline')) out.push(...groups[g++].reverse(), l);
      return out
        .join('\n')
        .replace(
          /points="([^"]*)"/g,
          (_, points) =>
            `points=" ${points.replace(/(\d\.\d+?)0+(?=[ ,]|$)/g, '$1').replaceAll(',', '\n ')} "`,
        );
    });
    expect(report.ok).toBe(true);
  });

  it.each<[string, ProofFormat, (path: string, content: string) => string | null]>([
    ['a missing layer', 'csv', (p, c) => (p === 'top/layer-03.csv' ? null : c)],
    ['a mirrored axis', 'csv', (p, c) => (p.endsWith('.csv') ? eachRow(c, (x, y) => [-x, y]) : c)],
    ['inches', 'csv', (p, c) => (p.endsWith('.csv') ? eachRow(c, (x, y) => [x / 25.4, y / 25.4]) : c)],
    [
      'inches in the page',
      'svg',
      (p, c) =>
        p.endsWith('.svg') ? c.replace('width="110mm" height="110mm"', 'width="110in" height="110in"') : c,
    ],
    ['all shifted by 0.4 mm', 'csv', (p, c) => (p.endsWith('.csv') ? eachRow(c, (x, y) => [x + 0.4, y]) : c)],
    [
      'one layer shifted by 0.4 mm',
      'csv',
      (p, c) => (p === 'top/layer-02.csv' ? eachRow(c, (x, y) => [x, y - 0.4]) : c),
    ],
    [
      'a wrong sign of Z',
      'csv',
      (p, c) =>
        p === 'report.json'
          ? c.replace(/"(zOffset|focusHeight)": (-?)([\d.]+)/g, (_, k, s, v) => `"${k}": ${s ? '' : '-'}${v}`)
          : c,
    ],
    [
      'a missing fill',
      'svg',
      (p, c) =>
        p === 'top/layer-05.svg' ? c.replace(/(<g id="class-1-fill"[^>]*>)[\s\S]*?<\/g>/, '$1</g>') : c,
    ],
    [
      'an element left out',
      'csv',
      (p, c) =>
        p === 'top/layer-01.csv'
          ? c
              .split('\n')
              .filter((l) => !l.includes(',tail/10,'))
              .join('\n')
          : c,
    ],
    ['half the power', 'csv', (p, c) => (p.endsWith('.csv') ? c.replace(/,1$/gm, ',0.2') : c)],
  ])('%s fails the proof', (_, format, change) => {
    const report = proveWith(format, change);
    expect(report.ok).toBe(false);
  });
});

import { readFileSync } from 'node:fs';
import { join } from 'node:path';
import { expect, test } from 'vitest';
import type { Report } from '../../src/core/project/report.ts';
import { emptyFolder, runCli } from '../helpers/cli.ts';
import { filesBelow } from './job.ts';

test('the demonstration needs at least four layers on a two-pivot head, every check holds and its proof is clean', async () => {
  const out = join(emptyFolder(), 'demo');
  const r = await runCli(['demo', '--out', out, '--progress', 'none']);
  expect(r.stderr).toBe('');
  expect(r.status).toBe(0);
  const report: Report = JSON.parse(readFileSync(join(out, 'report.json'), 'utf8'));
  const project = JSON.parse(readFileSync(join(out, 'project.drape.json'), 'utf8'));
  expect(project.head.pivot.every((p: number | null) => p !== null)).toBe(true);
  expect(report.setups).toHaveLength(1);
  expect(report.setups[0].layers.length).toBeGreaterThanOrEqual(4);
  expect(report.proof).toMatchObject({ ok: true, focus: 1, opens: [], shorts: [], findings: [] });
  expect(report.proof?.covered).toBeGreaterThanOrEqual(0.995);
  expect(report.proof?.stray_mm2).toBeLessThan(0.001);
  const files = filesBelow(out);
  for (const layer of report.setups[0].layers) for (const f of layer.files) expect(files.has(f)).toBe(true);
  for (const name of ['dial.stl', 'electrodes.svg', 'tail.gbr'])
    expect(files.get(`source/${name}`)).toEqual(
      readFileSync(new URL(`../../assets/demo/${name}`, import.meta.url)),
    );
  // Electrodes come from one drawing, the tail from the other, and traces on the part join them.
  const from = (id: string) => report.elements.filter((e) => e.id.startsWith(id));
  expect(from('dome/electrode').map((e) => e.net)).toEqual([1, 2, 3, 4, 5].map((n) => `SENSE${n}`));
  expect(from('tail/')).toHaveLength(14);
  expect(from('link')).toHaveLength(7);
  expect(report.nets.map((n) => [n.name, n.pieces]).sort()).toEqual(
    ['GUARD', 'SENSE1', 'SENSE2', 'SENSE3', 'SENSE4', 'SENSE5'].map((n) => [n, 1]),
  );
}, 180_000);

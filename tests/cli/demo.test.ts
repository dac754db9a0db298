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
  expect(files.get('source/dial.stl')).toEqual(
    readFileSync(new URL('../../assets/demo/dial.stl', import.meta.url)),
  );
}, 180_000);

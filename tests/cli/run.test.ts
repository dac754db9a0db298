import { existsSync, mkdirSync, readdirSync, readFileSync, renameSync, rmSync, writeFileSync } from 'node:fs';
import { join } from 'node:path';
import { beforeAll, describe, expect, test } from 'vitest';
import type { Report } from '../../src/core/project/report.ts';
import { type Ended, emptyFolder, runCli } from '../helpers/cli.ts';
import { type AnyProject, filesBelow, type JobOnDisk, placeOn, putJob } from './job.ts';

const reportIn = (dir: string): Report => JSON.parse(readFileSync(join(dir, 'report.json'), 'utf8'));

describe('a job in which every check holds', () => {
  let job: JobOnDisk;
  let out: string;
  let ended: Ended;
  beforeAll(async () => {
    job = putJob((p) => {
      p.note = 'a field of somebody else';
    });
    out = join(job.folder, 'out/job');
    ended = await runCli(['run', job.project, '--out', out, '--threads', '2', '--progress', 'lines']);
  });

  test('ends with 0 and a folder that holds files, report, sheet and all that they were made from', () => {
    expect(ended.stderr).not.toMatch(/fault/i);
    expect(ended.status).toBe(0);
    const report = reportIn(out);
    expect(report.ok).toBe(true);
    expect(report.setups[0].layers).toHaveLength(2);
    const named = report.setups.flatMap((s) => s.layers.flatMap((l) => l.files));
    expect(named.length).toBeGreaterThan(0);
    expect([...filesBelow(out).keys()].sort()).toEqual(
      [...named, 'project.drape.json', 'report.json', 'sheet.html', 'source/stone.stl'].sort(),
    );
    expect(readdirSync(join(job.folder, 'out'))).toEqual(['job']);
  });
  test('says on stdout which Z to set for each layer, which axis moves, the verdict and where the sheet is', () => {
    const report = reportIn(out);
    for (const layer of report.setups[0].layers) {
      expect(ended.stdout).toContain(layer.zOffset.toFixed(3));
      expect(ended.stdout).toContain(layer.files[0]);
    }
    expect(ended.stdout).toMatch(/the stage moves; positive lifts the part/);
    expect(ended.stdout).toMatch(/Proof: burnt on the model, the files give the drawn copper/);
    expect(ended.stdout).toContain(`${out}/sheet.html`);
    expect(ended.stdout).not.toMatch(/…\n.*%/);
  });
  test('an unknown field is reported and kept in the copy', () => {
    expect(reportIn(out).unknownFields).toEqual(['$.note']);
    expect(ended.stdout).toContain('$.note');
    const copy = JSON.parse(readFileSync(join(out, 'project.drape.json'), 'utf8'));
    expect(copy.note).toBe('a field of somebody else');
    expect(copy.part.file).toBe('source/stone.stl');
  });
  test('phases that take time are timed', () => {
    const timing = reportIn(out).timing ?? {};
    expect(Object.keys(timing)).toEqual(
      expect.arrayContaining(['load_s', 'drape_s', 'reach_s', 'layers_s', 'scan_s', 'proof_s']),
    );
    for (const seconds of Object.values(timing)) expect(seconds).toBeGreaterThanOrEqual(0);
  });
  test('the bytes do not depend on the number of threads, nor on what is there already', async () => {
    const [a, b] = [join(job.folder, 'a'), join(job.folder, 'b')];
    const args = (dir: string, threads: string) => [
      'run',
      job.project,
      '--out',
      dir,
      '--no-timing',
      '--threads',
      threads,
      '--progress',
      'none',
    ];
    const first = await runCli(args(a, '1'));
    const second = await runCli(args(b, '3'));
    expect([first.status, second.status]).toEqual([0, 0]);
    expect(first.stderr + second.stderr).toBe('');
    expect(filesBelow(b)).toEqual(filesBelow(a));
    expect(reportIn(a).timing).toBeUndefined();
    const before = filesBelow(a);
    writeFileSync(join(a, 'left.svg'), 'of an earlier run');
    expect((await runCli(args(a, '2'))).status).toBe(0);
    expect(filesBelow(a)).toEqual(before);
  });

  describe('and its folder alone, moved elsewhere', () => {
    let alone: string;
    beforeAll(async () => {
      alone = join(emptyFolder(), 'moved here');
      renameSync(out, alone);
      rmSync(job.folder, { recursive: true });
    });
    test('proves itself, each format on its own', async () => {
      const r = await runCli(['prove', alone, '--json', '--progress', 'none']);
      expect(r.stderr).toBe('');
      expect(r.status).toBe(0);
      const proof = JSON.parse(r.stdout);
      expect(proof.ok).toBe(true);
      expect(proof.byFormat.map((f: { format: string }) => f.format).sort()).toEqual(['csv', 'svg']);
      expect(proof.covered).toBeGreaterThan(0.995);
    });
    test('runs again from its own copy to the same scan files', async () => {
      const again = join(emptyFolder(), 'again');
      const r = await runCli([
        'run',
        join(alone, 'project.drape.json'),
        '--out',
        again,
        '--progress',
        'none',
      ]);
      expect(r.status).toBe(0);
      const scans = (dir: string) => [...filesBelow(dir)].filter(([path]) => /\.(svg|csv)$/.test(path));
      expect(scans(again)).toEqual(scans(alone));
    });
    test('a layer that is missing fails the proof; the other format still holds', async () => {
      const layer = reportIn(alone).setups[0].layers[0].files.find((f) => f.endsWith('.csv')) as string;
      rmSync(join(alone, layer));
      const r = await runCli(['prove', alone, '--progress', 'none']);
      expect(r.status).toBe(1);
      expect(r.stdout).toMatch(/DO NOT GIVE THE DRAWN COPPER/);
      expect(r.stdout).toContain(layer);
      const svg = await runCli(['prove', alone, '--formats', 'svg', '--progress', 'none']);
      expect(svg.status).toBe(0);
      expect(svg.stdout).toMatch(/CSV: written by the run, not looked at now/);
    });
    test('a mirrored layer fails the proof', async () => {
      const layer = reportIn(alone)
        .setups[0].layers.at(-1)
        ?.files.find((f) => f.endsWith('.csv')) as string;
      const path = join(alone, layer);
      const text = readFileSync(path, 'utf8');
      writeFileSync(
        path,
        text.replace(/^(-?)(\d)/gm, (_, sign, digit) => (sign ? digit : `-${digit}`)),
      );
      const r = await runCli(['prove', alone, '--formats', 'csv', '--json', '--progress', 'none']);
      expect(r.status).toBe(1);
      expect(JSON.parse(r.stdout).ok).toBe(false);
    });
    test('without the report it is no folder of a run', async () => {
      rmSync(join(alone, 'report.json'));
      const r = await runCli(['prove', alone]);
      expect(r.status).toBe(2);
      expect(r.stderr).toMatch(/holds no report\.json/);
    });
  });
});

describe('a job in which a check fails', () => {
  const steep = (p: AnyProject): void => {
    p.circuit.elements.push({
      id: 'steep',
      kind: 'trace',
      net: 'STEEP',
      width: 0.6,
      route: [placeOn(5.2, 1.15), placeOn(5.3, 1.45)],
    });
  };
  test('run: status 1, the element and its reason named, the files written all the same', async () => {
    const job = putJob(steep);
    const out = join(job.folder, 'out');
    const r = await runCli(['run', job.project, '--out', out, '--progress', 'none']);
    expect(r.status).toBe(1);
    expect(r.stdout).toMatch(/NOT EVERY CHECK HOLDS/);
    expect(r.stdout).toMatch(/steep +too oblique: \d\d\.\d°/);
    expect([...filesBelow(out).keys()].some((f) => f.endsWith('.svg'))).toBe(true);
    expect(reportIn(out).ok).toBe(false);
  });
  test('check: status 1, a table or JSON, nothing written', async () => {
    const job = putJob(steep);
    const before = filesBelow(job.folder);
    const r = await runCli(['check', job.project, '--json', '--progress', 'none']);
    expect(r.status).toBe(1);
    const report: Report = JSON.parse(r.stdout);
    const bad = report.elements.filter((e) => !e.incidence.ok).map((e) => e.id);
    expect(bad).toEqual(['steep']);
    const words = await runCli(['check', job.project, '--progress', 'none']);
    expect(words.status).toBe(1);
    expect(words.stdout).toMatch(/steep .*° !/);
    expect(filesBelow(job.folder)).toEqual(before);
  });
  test('check: status 0 when every check holds', async () => {
    expect((await runCli(['check', putJob().project, '--progress', 'none'])).status).toBe(0);
  });
  test('a part that would meet the lens: status 1, no scan files', async () => {
    const job = putJob((p) => {
      p.head.workingDistance = 14;
      p.limits = { clearance: 13 };
    });
    const out = join(job.folder, 'out');
    const r = await runCli(['run', job.project, '--out', out, '--progress', 'none']);
    expect(r.status).toBe(1);
    expect(r.stdout).toMatch(/would meet the lens/);
    expect([...filesBelow(out).keys()].filter((f) => /\.(svg|csv)$/.test(f))).toEqual([]);
    expect(reportIn(out).collisions.length).toBeGreaterThan(0);
  });
});

describe('bad input: status 2, a line for each problem that names file and place, nothing written', () => {
  const cases: [string, (p: AnyProject, job: () => JobOnDisk) => void, RegExp][] = [
    [
      'a part that is not there',
      (p) => (p.part.file = 'nowhere.stl'),
      /small\.drape\.json, \$\.part\.file: .*nowhere\.stl: there is no such file/,
    ],
    [
      'a head without focal length',
      (p) => delete p.head.focalLength,
      /small\.drape\.json, \$\.head\.focalLength: a required value is missing/,
    ],
    [
      'a width that is a word',
      (p) => (p.circuit.elements[0].width = 'wide'),
      /\$\.circuit\.elements\[0\]\.width/,
    ],
    ['a pivot inside the lens', (p) => (p.head.pivot = [100, 178]), /\$\.head\.pivot\[0\]/],
    [
      'a route point off the part',
      (p) => (p.circuit.elements[0].route[1].at = [0, 0, 40]),
      /\$\.circuit\.elements\[0\]\.route\[1\]/,
    ],
    [
      'an id used twice',
      (p) => (p.circuit.elements[1].id = p.circuit.elements[0].id),
      /\$\.circuit\.elements\[1\]\.id/,
    ],
    ['a project of a newer program', (p) => (p.version = 2), /\$\.version/],
  ];
  for (const [name, change, words] of cases)
    test(name, async () => {
      const job = putJob(change as (p: AnyProject) => void);
      const before = filesBelow(job.folder);
      const r = await runCli(['run', job.project, '--out', join(job.folder, 'out'), '--progress', 'none']);
      expect(r.status).toBe(2);
      expect(r.stdout).toBe('');
      expect(r.stderr).toMatch(words);
      expect(r.stderr.trim().split('\n')).toHaveLength(1);
      expect(filesBelow(job.folder)).toEqual(before);
      expect(readdirSync(job.folder).sort()).toEqual(['jobs', 'parts']);
    });
  test('text that is no JSON', async () => {
    const job = putJob();
    writeFileSync(job.project, '{\n  "format": "beamdrape",\n  oops\n}');
    const r = await runCli(['run', job.project, '--out', join(job.folder, 'out')]);
    expect(r.status).toBe(2);
    expect(r.stderr).toMatch(/small\.drape\.json, line 3/);
  });
  test('a part that breaks off', async () => {
    const job = putJob();
    const part = join(job.folder, 'parts/stone.stl');
    writeFileSync(part, readFileSync(part).subarray(0, 3000));
    const r = await runCli(['run', job.project, '--out', join(job.folder, 'out'), '--progress', 'none']);
    expect(r.status).toBe(2);
    expect(r.stderr).toMatch(/stone\.stl, byte 3000: the file promises \d+ facets/);
    expect(existsSync(join(job.folder, 'out'))).toBe(false);
  });
  test('a folder that holds other things is refused before anything is computed', async () => {
    const job = putJob();
    const out = join(job.folder, 'thesis');
    mkdirSync(out);
    writeFileSync(join(out, 'chapter.txt'), 'years of work');
    const r = await runCli(['run', job.project, '--out', out]);
    expect(r.status).toBe(2);
    expect(r.stderr.trim().split('\n')).toHaveLength(1);
    expect(r.stderr).toMatch(/thesis: the folder holds other things/);
    expect(readdirSync(out)).toEqual(['chapter.txt']);
  });
});

test('Ctrl+C while a job runs: status 130, the earlier folder whole, nothing beside it', async () => {
  const job = putJob();
  const out = join(job.folder, 'out');
  expect((await runCli(['run', job.project, '--out', out, '--progress', 'none'])).status).toBe(0);
  const before = filesBelow(job.folder);
  let sent = false;
  const r = await runCli(['run', job.project, '--out', out, '--progress', 'json'], {
    act: (child) =>
      child.stderr?.on('data', (d: Buffer) => {
        if (!sent && d.toString().includes('"phase":"scan"')) sent = child.kill('SIGINT');
      }),
  });
  expect(sent).toBe(true);
  expect(r.status).toBe(130);
  expect(r.stdout).toBe('');
  expect(filesBelow(job.folder)).toEqual(before);
  expect(readdirSync(job.folder).sort()).toEqual(['jobs', 'out', 'parts']);
});

test('a part that is not the one the project was saved with is said, and the job goes on', async () => {
  const job = putJob((p) => {
    p.part.sha256 = '0'.repeat(64);
  });
  const r = await runCli(['check', job.project, '--progress', 'none']);
  expect(r.status).toBe(0);
  expect(r.stderr).toMatch(/stone\.stl is not the file that the project was saved with/);
});

import { spawnSync } from 'node:child_process';
import { existsSync, mkdirSync, readdirSync, readFileSync, writeFileSync } from 'node:fs';
import { join } from 'node:path';
import { beforeEach, describe, expect, test } from 'vitest';
import { checkTarget, putFolder } from '../../src/cli/folder.ts';
import { Cancelled, Fault, InputError } from '../../src/core/base/news.ts';
import { textFile } from '../../src/core/files/output.ts';
import { emptyFolder } from '../helpers/cli.ts';

const REPORT = textFile('report.json', '{"format":"beamdrape-report"}');
const files = [REPORT, textFile('top/layer-01.svg', 'one'), textFile('top/layer-02.svg', 'two')];
const going = (): boolean => false;

let parent = '';
let dir = '';
beforeEach(() => {
  parent = emptyFolder();
  dir = join(parent, 'job');
});

const codeOf = async (work: Promise<unknown>): Promise<string> => {
  const error = await work.then(
    () => null,
    (e) => e,
  );
  expect(error).toBeInstanceOf(InputError);
  return error.code;
};

test('all files stand in the folder, and nothing stands beside it', async () => {
  await putFolder(dir, files, going);
  expect(readFileSync(join(dir, 'top/layer-02.svg'), 'utf8')).toBe('two');
  expect(readdirSync(parent)).toEqual(['job']);
});

test('folders above are made', async () => {
  await putFolder(join(parent, 'a/b/job'), files, going);
  expect(existsSync(join(parent, 'a/b/job/report.json'))).toBe(true);
});

test('an earlier run is replaced as a whole: none of its files stay', async () => {
  await putFolder(dir, [REPORT, textFile('top/layer-09.svg', 'old')], going);
  await putFolder(dir, files, going);
  expect(readdirSync(join(dir, 'top')).sort()).toEqual(['layer-01.svg', 'layer-02.svg']);
  expect(readdirSync(parent)).toEqual(['job']);
});

describe('what is not ours stays', () => {
  test('a folder with other things', async () => {
    mkdirSync(dir);
    writeFileSync(join(dir, 'thesis.txt'), 'years of work');
    expect(await codeOf(checkTarget(dir))).toBe('not-ours');
    expect(await codeOf(putFolder(dir, files, going))).toBe('not-ours');
    expect(readdirSync(dir)).toEqual(['thesis.txt']);
  });
  test('a folder with a report of something else', async () => {
    mkdirSync(dir);
    writeFileSync(join(dir, 'report.json'), '{"format":"another"}');
    expect(await codeOf(checkTarget(dir))).toBe('not-ours');
  });
  test('a file', async () => {
    writeFileSync(dir, 'a file');
    expect(await codeOf(checkTarget(dir))).toBe('not-ours');
    expect(readFileSync(dir, 'utf8')).toBe('a file');
  });
  test('a file where a parent folder should be', async () => {
    writeFileSync(dir, 'a file');
    expect(await codeOf(putFolder(join(dir, 'deeper'), files, going))).toBe('cannot-write');
  });
  test('an empty folder may be filled', async () => {
    mkdirSync(dir);
    await putFolder(dir, files, going);
    expect(existsSync(join(dir, 'report.json'))).toBe(true);
  });
});

test('stopping between files leaves the earlier run whole and nothing beside it', async () => {
  await putFolder(dir, [REPORT, textFile('old.txt', 'old')], going);
  for (const after of [0, 1, 2, 3]) {
    let asked = 0;
    const error = await putFolder(dir, files, () => asked++ >= after).catch((e) => e);
    expect(error).toBeInstanceOf(Cancelled);
    expect(readdirSync(dir).sort()).toEqual(['old.txt', 'report.json']);
    expect(readdirSync(parent)).toEqual(['job']);
  }
});

test('a name that leaves the folder is a fault, and nothing is written', async () => {
  const error = await putFolder(dir, [REPORT, textFile('../escape.txt', 'x')], going).catch((e) => e);
  expect(error).toBeInstanceOf(Fault);
  expect(readdirSync(parent)).toEqual([]);
});

describe('what a killed run left', () => {
  /** Number of a process that has ended. */
  const deadPid = (): number => spawnSync(process.execPath, ['-e', '']).pid;
  test('the old folder moved aside comes back', async () => {
    mkdirSync(join(parent, `.job.${deadPid()}.old`));
    writeFileSync(
      join(parent, readdirSync(parent)[0], 'report.json'),
      '{"format":"beamdrape-report","old":true}',
    );
    await checkTarget(dir);
    expect(readdirSync(parent)).toEqual(['job']);
    expect(readFileSync(join(dir, 'report.json'), 'utf8')).toMatch(/old/);
  });
  test('a half-written new folder is cleared away; one that is being written is not', async () => {
    mkdirSync(join(parent, `.job.${deadPid()}.new`));
    mkdirSync(join(parent, `.job.${process.pid}.new`));
    mkdirSync(join(parent, `.other.${deadPid()}.new`));
    await checkTarget(dir);
    expect(readdirSync(parent).sort()).toHaveLength(2);
    expect(existsSync(join(parent, `.job.${process.pid}.new`))).toBe(true);
  });
});

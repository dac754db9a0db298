import { writeFileSync } from 'node:fs';
import { join } from 'node:path';
import { expect, test } from 'vitest';
import { stoneStl } from '../bench/part.ts';
import { emptyFolder, runCli } from '../helpers/cli.ts';

for (const signal of ['SIGINT', 'SIGTERM'] as const)
  test(`${signal} while a part is read ends the program with 130, and nothing is said on stdout`, async () => {
    const file = join(emptyFolder(), 'large.stl');
    writeFileSync(file, stoneStl(600_000));
    let sent = false;
    const r = await runCli(['inspect', file, '--progress', 'lines'], {
      act: (child) =>
        child.stderr?.on('data', () => {
          if (!sent) sent = child.kill(signal);
        }),
    });
    expect(sent).toBe(true);
    expect(r.status).toBe(130);
    expect(r.stdout).toBe('');
    expect(r.stderr).not.toMatch(/fault|error/i);
  });

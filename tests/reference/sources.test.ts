import { readdirSync, readFileSync } from 'node:fs';
import { describe, expect, it } from 'vitest';

const files = (readdirSync('tests', { recursive: true }) as string[])
  .filter((f) => f.endsWith('.reference.test.ts'))
  .map((f) => `tests/${f}`);

describe('reference tests', () => {
  it('there are some', () => {
    expect(files.length).toBeGreaterThan(3);
  });
  it.each(files)('%s names a source from the table', (file) => {
    const text = readFileSync(file, 'utf8');
    expect(text).toMatch(/from '(\.\.\/)+reference\/sources\.ts'/);
    expect(text).toMatch(/source\('/);
  });
});

/** What must not go wrong: first start, unsaved work, crashes, and what a page may not do. */
import { readFileSync, writeFileSync } from 'node:fs';
import { createRequire } from 'node:module';
import { dirname, join } from 'node:path';
import { afterEach, describe, expect, test } from 'vitest';
import {
  domeFolder,
  freshFolder,
  type OpenWindow,
  openWindow,
  planned,
  poll,
  step,
  stubDialogs,
} from './open-window.ts';

let open: OpenWindow[] = [];
afterEach(async () => {
  for (const w of open) await w.close();
  open = [];
});
async function window(file: string | null, user?: string): Promise<OpenWindow> {
  const w = await openWindow(file, user);
  open.push(w);
  return w;
}

/** Changes something small: the net of the first pad. */
async function change(w: OpenWindow, net: string): Promise<void> {
  await step(w.page, 'circuit');
  await w.page.locator('.elements button').first().click();
  const field = w.page.locator('.facts').getByRole('textbox', { name: 'Net' });
  await field.fill(net);
  await field.press('Enter');
  await poll(() => w.page.locator('.elements button').first().textContent()).toContain(net);
}

describe('first start', () => {
  test('opens the demonstration with three hints, and a hint put away stays away', async () => {
    const user = freshFolder();
    const first = await window(null, user);
    await poll(() => first.page.locator('.facts h2').textContent(), { timeout: 30_000 }).toBe('touch dial');
    await poll(() => first.page.locator('.hint').count()).toBe(3);
    await first.page.locator('.hint button').first().click();
    await poll(() => first.page.locator('.hint').count()).toBe(2);
    await first.page.waitForTimeout(500);
    await first.close();
    const second = await window(null, user);
    await poll(() => second.page.locator('.hint').count()).toBe(2);
    expect(second.faults).toEqual([]);
  });
});

describe('unsaved work', () => {
  test('is shown in the title, and closing asks: Cancel keeps the window, Save writes the file', async () => {
    const file = domeFolder();
    const w = await window(file);
    await planned(w.page);
    const title = () => w.app.evaluate(({ BrowserWindow }) => BrowserWindow.getAllWindows()[0]!.getTitle());
    expect(await title()).toBe('dome.drape.json – Beamdrape');
    await change(w, 'KEEP');
    await poll(title).toBe('• dome.drape.json – Beamdrape');
    const ask = () => w.app.evaluate(({ BrowserWindow }) => BrowserWindow.getAllWindows()[0]!.close());
    await ask();
    await w.page.getByRole('dialog').waitFor();
    await w.page.getByRole('button', { name: 'Cancel' }).click();
    expect(await w.app.evaluate(({ BrowserWindow }) => BrowserWindow.getAllWindows().length)).toBe(1);
    await ask();
    const gone = w.app.waitForEvent('close');
    await w.page.getByRole('button', { name: 'Save', exact: true }).click();
    await gone;
    expect(JSON.parse(readFileSync(file, 'utf8')).circuit.elements[0].net).toBe('KEEP');
  });

  test('undone to what was saved, the project counts as saved', async () => {
    const w = await window(domeFolder());
    await planned(w.page);
    await change(w, 'X');
    await poll(() =>
      w.app.evaluate(({ BrowserWindow }) => BrowserWindow.getAllWindows()[0]!.getTitle()),
    ).toMatch(/^• /);
    await w.page.getByTestId('view').focus();
    await w.page.keyboard.press('Control+z');
    await poll(() =>
      w.app.evaluate(({ BrowserWindow }) => BrowserWindow.getAllWindows()[0]!.getTitle()),
    ).not.toMatch(/^• /);
  });

  test('survives a crash: the next start offers it back', async () => {
    const user = freshFolder();
    const file = domeFolder();
    const w = await window(file, user);
    await planned(w.page);
    await change(w, 'LOST');
    await w.page.waitForTimeout(5500);
    w.app.process().kill('SIGKILL');
    await new Promise((done) => setTimeout(done, 500));
    const next = await window(null, user);
    await next.page.getByRole('dialog').waitFor();
    expect(await next.page.getByRole('dialog').textContent()).toContain('dome.drape.json');
    await next.page.getByRole('button', { name: 'Bring it back' }).click();
    await planned(next.page);
    await step(next.page, 'circuit');
    await poll(() => next.page.locator('.elements button').first().textContent()).toContain('LOST');
    await poll(() =>
      next.app.evaluate(({ BrowserWindow }) => BrowserWindow.getAllWindows()[0]!.getTitle()),
    ).toMatch(/^• dome/);
    expect(JSON.parse(readFileSync(file, 'utf8')).circuit.elements[0].net).toBe('A');
  });
});

describe('bad files', () => {
  test('a bad project is named with its place, and the window keeps what it had', async () => {
    const file = domeFolder();
    const bad = join(dirname(file), 'bad.drape.json');
    const project = JSON.parse(readFileSync(file, 'utf8'));
    project.circuit.elements[2].width = -1;
    writeFileSync(bad, JSON.stringify(project));
    const w = await window(file);
    await planned(w.page);
    await stubDialogs(w.app, { open: bad });
    await w.page.keyboard.press('Control+o');
    await poll(() => w.page.locator('.notice').allTextContents()).toContainEqual(
      expect.stringContaining('$.circuit.elements[2].width'),
    );
    expect(await w.page.locator('.facts h2').textContent()).toBe('lumpy dome');
    writeFileSync(join(dirname(file), 'noise.stl'), 'this is no part');
    await stubDialogs(w.app, { open: join(dirname(file), 'noise.stl') });
    await w.page.keyboard.press('Control+o');
    await poll(() => w.page.locator('.notice').allTextContents()).toContainEqual(
      expect.stringContaining('noise.stl'),
    );
    expect(w.faults).toEqual([]);
  });
});

describe('what the page may not do', () => {
  test('no Node, no eval, no navigation, no other window, no network, no file that was not chosen', async () => {
    const w = await window(domeFolder());
    await planned(w.page);
    expect(
      await w.page.evaluate(() => [
        typeof (globalThis as { require?: unknown }).require,
        typeof (globalThis as { process?: unknown }).process,
      ]),
    ).toEqual(['undefined', 'undefined']);
    expect(await w.page.evaluate(() => crossOriginIsolated)).toBe(true);
    const refused = await w.page.evaluate(
      () =>
        new Promise<string>((done) =>
          // Past the driver's own leave to evaluate: a timer's task stands under the page's policy.
          setTimeout(() => {
            try {
              new Function('return 1')();
              done('ran');
            } catch (e) {
              done((e as Error).name);
            }
          }),
        ),
    );
    expect(refused).toBe('EvalError');
    expect(await w.page.evaluate(() => globalThis.open('https://example.org'))).toBeNull();
    expect(
      await w.page.evaluate(() =>
        fetch('https://example.org').then(
          () => 'reached',
          () => 'refused',
        ),
      ),
    ).toBe('refused');
    expect(await w.page.evaluate(() => fetch('app://main/..%2fmain%2fmain.cjs').then((r) => r.status))).toBe(
      403,
    );
    await w.page.evaluate(() => {
      location.href = 'https://example.org';
    });
    await w.page.waitForTimeout(300);
    expect(w.page.url()).toBe('app://main/index.html');
    const asked = await w.page.evaluate(() => {
      const bridge = (globalThis as unknown as { beamdrape: { ask(r: unknown): Promise<unknown> } })
        .beamdrape;
      return Promise.all([
        bridge.ask({ ask: 'open-recent', ref: '/etc/passwd' }),
        bridge.ask({ ask: 'save', ref: 'made-up', text: 'x', part: null, drawings: [] }),
        bridge.ask({ ask: 'run', command: 'ls' }),
      ]);
    });
    expect(asked).toEqual([
      expect.objectContaining({ ok: false }),
      expect.objectContaining({ ok: false }),
      expect.objectContaining({ ok: false }),
    ]);
  });
});

describe('access', () => {
  const axe = readFileSync(createRequire(import.meta.url).resolve('axe-core/axe.min.js'), 'utf8');

  test.each(['light', 'dark'] as const)(
    'axe finds nothing in the %s window, in any step',
    async (colorScheme) => {
      const w = await window(domeFolder());
      await planned(w.page);
      await w.page.emulateMedia({ colorScheme, reducedMotion: 'reduce' });
      await w.page.evaluate(axe);
      for (const name of ['part', 'circuit', 'head', 'reach', 'heights', 'files']) {
        await step(w.page, name);
        if (name === 'circuit') await w.page.locator('.elements button').nth(2).click();
        if (name === 'heights') await w.page.getByTestId('marker').press('PageUp');
        const found = await w.page.evaluate(async () => {
          const run = (
            globalThis as unknown as {
              axe: {
                run(o: unknown): Promise<{
                  violations: { id: string; nodes: { html: string; failureSummary: string }[] }[];
                }>;
              };
            }
          ).axe;
          const { violations } = await run.run({
            runOnly: ['wcag2a', 'wcag2aa', 'wcag21a', 'wcag21aa', 'wcag22aa', 'best-practice'],
          });
          return violations.map(
            (v) =>
              `${v.id}: ${v.nodes.map((n) => `${n.html.slice(0, 160)} ${n.failureSummary.slice(0, 200)}`).join(' | ')}`,
          );
        });
        expect(found, name).toEqual([]);
      }
    },
  );

  test('Tab reaches journey, viewport, tools, facts, strip and marker, each with a visible ring', async () => {
    const w = await window(domeFolder());
    await planned(w.page);
    const seen = new Set<string>();
    await w.page.locator('[data-step=part]').focus();
    for (let i = 0; i < 60; i++) {
      const { where, ring } = await w.page.evaluate(() => {
        const e = document.activeElement as HTMLElement;
        const inner = e.querySelector('.tag') ?? e.querySelector('rect') ?? e;
        const style = getComputedStyle(e);
        const around = getComputedStyle(e.closest('.entry') ?? e);
        return {
          where:
            e.closest('.journey, .tools, .facts, .strip, .legend, .hints, canvas')?.className ||
            e.tagName.toLowerCase(),
          ring:
            style.outlineStyle !== 'none' ||
            around.outlineStyle !== 'none' ||
            getComputedStyle(inner).strokeWidth === '3px',
        };
      });
      seen.add(where);
      if (where !== 'body') expect(ring, where).toBe(true);
      await w.page.keyboard.press('Tab');
    }
    for (const part of ['journey', 'canvas', 'tools', 'legend', 'strip']) expect([...seen]).toContain(part);
  });
});

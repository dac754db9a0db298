import { describe, expect, it } from 'vitest';
import { Cancelled, InputError } from '../../../src/core/base/news.ts';
import { quiet } from '../../../src/core/base/run-context.ts';
import { encodeUtf8 } from '../../../src/core/base/utf8.ts';
import { prove } from '../../../src/core/proof/prove.ts';
import {
  box,
  copperOf,
  filesOf,
  pack,
  planRects,
  projectWith,
  type Rect,
  type Scene,
  type TestFiles,
  turned,
} from '../helpers/proof-scene.ts';

const LEAN = 20; // degrees about Y: the top runs through the focal plane, x = -11 … 8 is 6.5 mm of height
const slope = Math.sin((LEAN * Math.PI) / 180);

/** Lopsided in every way: no mirror image or turn of it is itself. */
const rects: Rect[] = [
  { id: 't1', net: 'A', from: [-11, -6], to: [4, -5.4] },
  { id: 'p1', net: 'A', from: [4, -6.4], to: [5.6, -4.6] },
  { id: 't2', net: 'B', from: [-9, -5.1], to: [3, -4.5] },
  { id: 'p2', net: 'B', from: [-9, 5], to: [-7.2, 6.1] },
];

/** Two layers on the leaning top, on a two-pivot head away from the field's middle. */
function leaning(change: Record<string, unknown> = {}): Scene {
  const pose = turned([0, 1, 0], LEAN, [12, -7, 0]);
  const project = projectWith(pose, change);
  // bench height = -x sin(lean)
  const cut = -1.5;
  const middle = (a: number, b: number) => (-(a + b) / 2) * slope;
  const layers = planRects(project, pose, rects, [
    { focusHeight: middle(cut - 0.1, 5.6), x: [cut - 0.1, 5.6] },
    { focusHeight: middle(-11, cut + 0.1), x: [-11, cut + 0.1] },
  ]);
  return { project, pose, mesh: box(-14, -9, 10, 8, 4), copper: copperOf(rects), layers };
}

const run = (
  scene: Scene,
  tamper: (f: TestFiles) => void = () => {},
  formats: ('svg' | 'csv')[] = ['csv', 'svg'],
) => {
  const files = filesOf(scene);
  tamper(files);
  return prove(
    { project: scene.project, mesh: scene.mesh, copper: scene.copper, files: pack(files), formats },
    quiet,
  );
};

/** Rewrites each point of each CSV file. */
const moveCsv = (f: TestFiles, change: (x: number, y: number) => [number, number], only = /./) => {
  for (const [path, text] of f.scans)
    if (path.endsWith('.csv') && only.test(path))
      f.scans.set(
        path,
        text.replace(
          /^(-?[\d.]+),(-?[\d.]+),/gm,
          (_, x, y) =>
            change(Number(x), Number(y))
              .map((v) => v.toFixed(4))
              .join(',') + ',',
        ),
      );
};
const keepRows = (f: TestFiles, keep: (row: string, i: number) => boolean, only = /csv$/) => {
  for (const [path, text] of f.scans)
    if (only.test(path))
      f.scans.set(
        path,
        text
          .split('\n')
          .filter((r, i) => i === 0 || keep(r, i))
          .join('\n'),
      );
};

describe('read-back proof of honest files', () => {
  it('passes on a leaning plate in two layers under a two-pivot head, in either format', () => {
    const { report, byFormat } = run(leaning());
    expect(report).toMatchObject({
      ok: true,
      focus: 1,
      stray_mm2: 0,
      opens: [],
      shorts: [],
      files: 4,
      findings: [],
    });
    expect(report.covered).toBeGreaterThan(0.995);
    expect(byFormat.map((f) => [f.format, f.report.ok, f.report.files])).toEqual([
      ['csv', true, 2],
      ['svg', true, 2],
    ]);
  });

  it('passes when the head moves instead of the stage', () => {
    expect(run(leaning({ stage: { zMoves: 'head' } })).report).toMatchObject({ ok: true, findings: [] });
  });

  it('gives the same report twice', () => {
    expect(run(leaning())).toEqual(run(leaning()));
  });

  it('passes an SVG whose strokes another program saved in another order, as relative paths with exponents', () => {
    const scene = leaning();
    const { report } = run(
      scene,
      (f) => {
        for (const [path, text] of f.scans) {
          if (!path.endsWith('.svg')) continue;
          const again = text
            .replace(/<polyline points="([^"]*)"\/>/g, (_, points: string) => {
              let [px, py] = [0, 0];
              const d = points.split(' ').map((p, i) => {
                const [x, y] = p.split(',').map(Number);
                const step = `${i ? 'l' : 'm'}${(x - px).toExponential(6)} ${(y - py).toExponential(6)}`;
                [px, py] = [x, y];
                return step;
              });
              return `<path d="${d.join('')}" style="fill:none"/>`;
            })
            .replace('width="110mm" height="110mm"', 'width="11cm" height="4.330708661in"')
            .replace(/(<path[^>]*\/>\n)(<path[^>]*\/>\n)/g, '$2$1')
            .replace(
              '<g data-kind="fill">',
              '<g data-kind="fill" transform="translate(1 2) translate(-1,-2)">',
            );
          f.scans.set(path, again);
        }
      },
      ['svg'],
    );
    expect(report).toMatchObject({ ok: true, findings: [] });
  });
});

describe('progress and stopping', () => {
  const scene = leaning();
  const input = {
    project: scene.project,
    mesh: scene.mesh,
    copper: scene.copper,
    files: pack(filesOf(scene)),
    formats: ['csv', 'svg'] as const,
  };

  it('progress never runs backward and ends complete', () => {
    const seen: [number, number][] = [];
    prove(input, { step: (_, done, of) => seen.push([done, of]) });
    expect(seen.every(([done], i) => i === 0 || done >= seen[i - 1][0])).toBe(true);
    expect(seen[seen.length - 1]).toEqual([5, 5]);
  });

  it.each([1, 3, 6, 9])('stops when asked at step %d', (at) => {
    let n = 0;
    const step = () => {
      if (++n === at) throw new Cancelled();
    };
    let stopped = false;
    try {
      prove(input, { step });
    } catch (error) {
      stopped = error instanceof Cancelled;
    }
    expect([stopped, n]).toEqual([true, at]);
  });
});

describe('read-back proof of tampered files', () => {
  it('a wrong sign of Z fails for its defocus, and is said', () => {
    const { report } = run(leaning(), (f) => {
      for (const l of f.report.setups[0].layers) l.zOffset *= -1;
    });
    expect(report.ok).toBe(false);
    expect(report.focus).toBeLessThan(0.5);
    expect(report.findings.join()).toContain('zOffset');
  });

  it('a wrong sign of Z fails by the burn alone when focusHeight is turned round with it', () => {
    const { report } = run(leaning(), (f) => {
      for (const l of f.report.setups[0].layers) {
        l.zOffset *= -1;
        l.focusHeight *= -1;
      }
    });
    expect(report.findings).toEqual([]);
    expect(report.ok).toBe(false);
    expect(report.focus).toBeLessThan(0.5);
  });

  it.each([
    ['x', (x: number, y: number): [number, number] => [-x, y]],
    ['y', (x: number, y: number): [number, number] => [x, -y]],
  ])('a mirrored axis (%s) fails: nothing where it was drawn, copper where nothing was', (_, mirror) => {
    const { report } = run(leaning(), (f) => moveCsv(f, mirror), ['csv']);
    expect(report.ok).toBe(false);
    expect(report.covered).toBeLessThan(0.5);
    expect(report.opens.length).toBeGreaterThan(0);
  });

  it('inches taken for millimetres fail: commands leave the field', () => {
    const { report } = run(leaning(), (f) => moveCsv(f, (x, y) => [25.4 * x, 25.4 * y]), ['csv']);
    expect(report.ok).toBe(false);
    expect(report.findings.join()).toContain('outside the field');
  });

  it('millimetres taken for inches (numbers 25.4 times too small) fail', () => {
    const { report } = run(leaning(), (f) => moveCsv(f, (x, y) => [x / 25.4, y / 25.4]), ['csv']);
    expect(report).toMatchObject({ ok: false, covered: 0 });
  });

  it.each([
    ['inches', 'width="110in" height="110in"'],
    ['half the size', 'width="55mm" height="55mm"'],
    ['no unit', 'width="110" height="110"'],
  ])('an SVG page in %s fails', (_, size) => {
    const { report } = run(
      leaning(),
      (f) =>
        f.scans.forEach((t, p) => {
          f.scans.set(p, t.replace('width="110mm" height="110mm"', size));
        }),
      ['svg'],
    );
    expect(report.ok).toBe(false);
  });

  it('a missing layer fails: the file is named, and elements it wrote are open', () => {
    const { report, byFormat } = run(leaning(), (f) => f.scans.delete('top/layer-02.csv'));
    expect(report.ok).toBe(false);
    expect(report.findings).toEqual(['top/layer-02.csv is missing.']);
    expect(report.opens).toContainEqual(['p2']);
    expect(byFormat.map((b) => b.report.ok)).toEqual([false, true]);
  });

  it('a file that the report does not know fails, and a drawing in the folder above does not', () => {
    const scene = leaning();
    const more = (f: TestFiles) => f.scans.set('top/layer-03.csv', f.scans.get('top/layer-02.csv')!);
    expect(run(scene, more).report).toMatchObject({
      ok: false,
      findings: ['top/layer-03.csv belongs to no layer of the report.'],
    });
    expect(run(scene, (f) => f.scans.set('ring.svg', '<svg/>')).report.ok).toBe(true);
  });

  it('a layer shifted by 0.4 mm fails for stray copper, its area within 10 % of what lies beyond the tolerance', () => {
    // 0.4 mm up: of each strip (telecentric, flat) the part more than 0.05 mm above its edge is stray, unless it is near other copper
    const pose = turned([0, 0, 1], 0);
    const project = projectWith(pose, { head: { ...projectWith(pose).head, pivot: null } });
    const alone: Rect[] = [{ id: 't1', net: 'A', from: [-11, -6], to: [4, -5.4] }];
    const scene: Scene = {
      project,
      pose,
      mesh: box(-14, -9, 10, 8, 4),
      copper: copperOf(alone),
      layers: planRects(project, pose, alone, [{ focusHeight: 0, x: [-20, 20] }]),
    };
    const { report } = run(scene, (f) => moveCsv(f, (x, y) => [x, y + 0.4]), ['csv']);
    expect(report.ok).toBe(false);
    expect(report.covered).toBeGreaterThan(0.3);
    expect(report.covered).toBeLessThan(0.36);
    const expected = 15 * (0.4 - 0.05);
    expect(Math.abs(report.stray_mm2 - expected)).toBeLessThan(0.1 * expected);
  });

  it('a stroke where nothing is drawn fails for stray copper alone', () => {
    const scene = leaning();
    const more = planRects(
      scene.project,
      scene.pose,
      [{ id: 'x', net: '', from: [1, 3], to: [3, 3.4] }],
      [{ focusHeight: scene.layers[0].focusHeight, x: [-20, 20] }],
    )[0].strokes;
    const layers = scene.layers.map((l, i) => (i ? l : { ...l, strokes: [...l.strokes, ...more] }));
    const { report } = run({ ...scene, layers });
    expect(report).toMatchObject({ ok: false, focus: 1, opens: [], shorts: [], findings: [] });
    expect(report.covered).toBeGreaterThan(0.995);
    expect(Math.abs(report.stray_mm2 / 0.8 - 1)).toBeLessThan(0.1);
  });

  it('a pose spoilt in the report does not count where the project gives its own, and does where it was measured', () => {
    const spoil = (f: TestFiles) => {
      f.report.setups[0].pose = { ...f.report.setups[0].pose, move: [12.5, -7, 0] };
    };
    const scene = leaning();
    expect(run(scene, spoil, ['csv']).report.ok).toBe(true);
    const measured = projectWith(scene.pose, {
      setups: [{ name: 'top', pose: scene.pose, measured: { F1: [0, 0, 0] } }],
    });
    expect(run({ ...scene, project: measured }, () => {}, ['csv']).report.ok).toBe(true);
    expect(run({ ...scene, project: measured }, spoil, ['csv']).report.ok).toBe(false);
  });

  it('a missing fill fails for coverage, and nothing else', () => {
    const { report } = run(
      leaning(),
      (f) =>
        f.scans.forEach((t, p) => {
          f.scans.set(p, t.replace(/<g data-kind="fill">[\s\S]*?<\/g>/, ''));
        }),
      ['svg'],
    );
    expect(report).toMatchObject({ ok: false, focus: 1, stray_mm2: 0, shorts: [], findings: [] });
    expect(report.covered).toBeLessThan(0.5);
  });

  it('a missing outline stroke fails for coverage', () => {
    const scene = leaning();
    const { report } = run(
      scene,
      (f) => {
        const layer = scene.layers[0];
        const cut = layer.strokes.findIndex((s) => s.kind === 'outline' && s.element === 'p1');
        let stroke = -1;
        keepRows(
          f,
          (row) => {
            if (row.split(',')[2] === '0') stroke++;
            return stroke !== cut;
          },
          /layer-01.csv$/,
        );
      },
      ['csv'],
    );
    expect(report).toMatchObject({ ok: false, coveredElement: 'p1', opens: [], shorts: [], stray_mm2: 0 });
    expect(report.covered).toBeGreaterThan(0.9);
  });

  it('one element removed fails: it is open', () => {
    const { report } = run(leaning(), (f) => keepRows(f, (row) => row.split(',')[4] !== 'p2'), ['csv']);
    expect(report).toMatchObject({
      ok: false,
      covered: 0,
      coveredElement: 'p2',
      opens: [['p2']],
      shorts: [],
    });
  });

  it('a trace cut in two by a gap of 0.2 mm is open, though nearly all of it is covered', () => {
    const { report } = run(
      leaning(),
      (f) => {
        // t1 in layer 2 runs over x = -11 … -1.4 on the part: leave out what is burnt at part x = -6 … -5.8
        const text = f.scans.get('top/layer-02.csv')!;
        const pose = leaning();
        const at = (x: number) =>
          planRects(
            pose.project,
            pose.pose,
            [{ id: 'g', net: 'A', from: [x - 0.021, -6], to: [x + 1, -5] }],
            [{ focusHeight: pose.layers[1].focusHeight, x: [-20, 20] }],
          )[0].strokes[0].points[0][0];
        const [from, to] = [at(-6), at(-5.8)];
        const rows = text.split('\n');
        const out = [rows[0]];
        let [lx, ly] = [0, 0];
        for (const row of rows.slice(1)) {
          const c = row.split(',');
          const x = Number(c[0]);
          const y = Number(c[1]);
          const crosses =
            c[2] === '1' && c[4] === 't1' && (lx - from) * (x - from) < 0 && (lx - to) * (x - to) < 0;
          if (crosses) {
            const [a, b] = lx < x ? [from, to] : [to, from];
            const line = (px: number) => (ly + ((y - ly) * (px - lx)) / (x - lx)).toFixed(4);
            out.push(`${a.toFixed(4)},${line(a)},1,600,t1,1`, `${b.toFixed(4)},${line(b)},0,3000,t1,1`);
          }
          out.push(row);
          [lx, ly] = [x, y];
        }
        f.scans.set('top/layer-02.csv', out.join('\n'));
      },
      ['csv'],
    );
    expect(report).toMatchObject({
      ok: false,
      opens: [['t1']],
      shorts: [],
      stray_mm2: 0,
      focus: 1,
      coveredElement: 't1',
    });
    expect(report.covered).toBeGreaterThan(0.97);
  });

  it('a pad that no longer reaches its trace is an open of the two', () => {
    const scene = leaning();
    // the pad's copper begins 0.15 mm further on: still most of it is covered
    const short = rects.map((r) => (r.id === 'p1' ? { ...r, from: [4.15, -6.4] as const } : r));
    const layers = planRects(
      scene.project,
      scene.pose,
      short,
      scene.layers.map((l, i) => ({ focusHeight: l.focusHeight, x: i ? [-11, -1.4] : [-1.6, 5.6] })),
    );
    const { report } = run({ ...scene, layers });
    expect(report).toMatchObject({ ok: false, opens: [['t1', 'p1']], shorts: [], stray_mm2: 0 });
  });

  it('a bridge between two nets is a short, though thinner than the stray tolerance allows for', () => {
    const scene = leaning();
    // t1 is A, t2 is B, 0.3 mm between them at part x = 0 … 0.3
    const bridge = planRects(
      scene.project,
      scene.pose,
      [{ id: 't1', net: 'A', from: [0, -5.45], to: [0.3, -5.05] }],
      [{ focusHeight: scene.layers[0].focusHeight, x: [-20, 20] }],
    )[0].strokes;
    const layers = scene.layers.map((l, i) => (i ? l : { ...l, strokes: [...l.strokes, ...bridge] }));
    const { report } = run({ ...scene, layers });
    expect(report).toMatchObject({ ok: false, shorts: [['A', 'B']], opens: [] });
    // between the two tolerances 0.2 mm by 0.3 mm are left
    expect(report.stray_mm2).toBeGreaterThan(0.9 * 0.06);
    expect(report.stray_mm2).toBeLessThan(1.1 * 0.06);
  });

  it('elements without a net are nets of their own', () => {
    const scene = leaning();
    const named = rects.map((r) => ({ ...r, net: '' }));
    // t1 and p1 touch
    expect(run({ ...scene, copper: copperOf(named) }).report.shorts).toEqual([['(p1)', '(t1)']]);
  });

  it('copper burnt from the wrong height fails for focus even where it is still activated', () => {
    const scene = leaning({ limits: { depth: { mode: 'distance', halfDepth: 1.5 } } });
    const { report } = run(scene);
    expect(report).toMatchObject({ ok: false, stray_mm2: 0, opens: [], shorts: [] });
    expect(report.focus).toBeLessThan(1);
    expect(report.covered).toBeGreaterThan(0.99);
  });

  it('the mean height of a layer 0.3 mm off fails for focus where the plan had used the whole depth', () => {
    // heights reach 1.64 mm from the focus in the second layer, of 1.7 mm usable
    const { report } = run(leaning(), (f) => {
      f.report.setups[0].layers[1].zOffset += 0.3;
      f.report.setups[0].layers[1].focusHeight -= 0.3;
    });
    expect(report.ok).toBe(false);
    expect(report.focus).toBeLessThan(1);
  });

  it('a report that moves the head where the project moves the stage is said', () => {
    const { report } = run(leaning(), (f) => {
      for (const l of f.report.setups[0].layers) {
        l.zMoves = 'head';
        l.zOffset *= -1;
      }
    });
    expect(report.ok).toBe(false);
    expect(report.findings.length).toBe(2);
  });
});

describe('what cannot be proved', () => {
  const codeOf = (work: () => unknown): string => {
    try {
      work();
    } catch (error) {
      if (error instanceof InputError)
        return `${error.code}, ${error.problems[0].file}, ${error.problems[0].place}`;
      throw error;
    }
    return 'nothing thrown';
  };
  const scene = leaning();
  const base = { project: scene.project, mesh: scene.mesh, copper: scene.copper };

  it('a folder without report.json', () => {
    expect(codeOf(() => prove({ ...base, files: [], formats: ['csv'] }, quiet))).toBe(
      'no-report, report.json, ',
    );
  });

  it('a report with a hole in it names the path', () => {
    const files = filesOf(scene);
    delete (files.report.setups[0].layers[1] as { zOffset?: number }).zOffset;
    expect(codeOf(() => prove({ ...base, files: pack(files), formats: ['csv'] }, quiet))).toBe(
      'bad-report, report.json, $.setups[0].layers[1].zOffset',
    );
    expect(
      codeOf(() =>
        prove({ ...base, files: [{ path: 'report.json', bytes: encodeUtf8('{') }], formats: ['csv'] }, quiet),
      ),
    ).toBe('bad-report, report.json, ');
  });

  it('an offset that lifts the part to the pivots', () => {
    const files = filesOf(scene);
    files.report.setups[0].layers[0].zOffset = 300;
    expect(codeOf(() => prove({ ...base, files: pack(files), formats: ['csv'] }, quiet))).toBe(
      'beyond-pivot, top/layer-01.csv, ',
    );
  });

  it('no formats at all is no proof', () => {
    expect(prove({ ...base, files: pack(filesOf(scene)), formats: [] }, quiet).report).toMatchObject({
      ok: false,
      files: 0,
    });
  });

  it('a format of which there is no file fails and says so', () => {
    const files = filesOf(scene);
    for (const l of files.report.setups[0].layers) l.files = l.files.filter((f) => f.endsWith('.csv'));
    const { report } = prove(
      { ...base, files: pack(files).filter((f) => !f.path.endsWith('.svg')), formats: ['svg'] },
      quiet,
    );
    expect(report).toMatchObject({
      ok: false,
      covered: 0,
      findings: ['Layer 1 of top has no svg file.', 'Layer 2 of top has no svg file.'],
    });
  });
});

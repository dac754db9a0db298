import { readFileSync, writeFileSync } from 'node:fs';
import { join } from 'node:path';
import { beforeAll, describe, expect, test } from 'vitest';
import { newProject } from '../../src/core/project/new-project.ts';
import type { Report } from '../../src/core/project/report.ts';
import { type Ended, emptyFolder, runCli } from '../helpers/cli.ts';

/** A tube's outer half as a closed part: 60 mm long, radius 25, so that drawings must bend. */
function halfRound(): Uint8Array {
  const [n, r, l] = [60, 25, 60];
  const at = (k: number, x: number): number[] => [
    x,
    -r * Math.cos((Math.PI * k) / n),
    r * Math.sin((Math.PI * k) / n),
  ];
  const facets: number[][] = [];
  const middle = (x: number): number[] => [x, 0, 0];
  for (let k = 0; k < n; k++) {
    const [a, b, c, d] = [at(k, 0), at(k, l), at(k + 1, l), at(k + 1, 0)];
    facets.push([...a, ...b, ...c], [...a, ...c, ...d]);
    facets.push([...middle(0), ...a, ...d], [...middle(l), ...c, ...b]);
  }
  const [p, q, s, t] = [at(0, 0), at(0, l), at(n, l), at(n, 0)];
  facets.push([...p, ...middle(0), ...middle(l)], [...p, ...middle(l), ...q]);
  facets.push([...middle(0), ...t, ...s], [...middle(0), ...s, ...middle(l)]);
  const bytes = new Uint8Array(84 + 50 * facets.length);
  const view = new DataView(bytes.buffer);
  view.setUint32(80, facets.length, true);
  facets.forEach((f, i) => {
    f.forEach((x, k) => {
      view.setFloat32(96 + 50 * i + 4 * k, x, true);
    });
  });
  return bytes;
}

/** Two pads joined by a track on net A, a pad on net B; numbers in µm. */
const GERBER = `%FSLAX43Y43*%
%MOMM*%
%TF.FileFunction,Copper,L1,Top*%
%ADD10C,0.600*%
%ADD11C,2.000*%
G01*
%TO.N,A*%
D10*
X-8000Y0D02*
X4000Y6000D01*
D11*
%TO.P,J1,1*%
X-8000Y0D03*
%TO.P,U1,1*%
X4000Y6000D03*
%TO.N,B*%
%TO.P,J1,2*%
X-8000Y-5000D03*
M02*
`;
const record = (net: string, part: string, pin: string, x: number, y: number): string => {
  const number = (v: number) => `${v < 0 ? '-' : '+'}${String(Math.abs(v)).padStart(6, '0')}`;
  return `327${net.padEnd(14)}   ${part.padEnd(6)}-${pin.padEnd(4)}       A01X${number(x)}Y${number(y)}X2000Y0000R000 S0`;
};
const netlist = (third: string): string =>
  [
    'P  UNITS CUST 1',
    record('A', 'J1', '1', -8000, 0),
    record(third, 'U1', '1', 4000, 6000),
    record('B', 'J1', '2', -8000, -5000),
    '999',
    '',
  ].join('\n');

const SVG = `<svg xmlns="http://www.w3.org/2000/svg" width="20mm" height="10mm" viewBox="0 0 20 10">
  <path id="wave" d="M1 5 C 6 -3 9 13 19 5" fill="none" stroke="black" stroke-width="0.7" stroke-linecap="round"/>
  <image href="x.png" width="3" height="3"/>
</svg>
`;

describe('a circuit from drawings', () => {
  let folder: string;
  const put = (change: (p: Record<string, unknown> & { circuit: { drapes: object[] } }) => void): string => {
    const project = newProject('half.stl', [
      [0, -25, 0],
      [60, 25, 25],
    ]) as unknown as Record<string, unknown> & { circuit: { drapes: object[] } };
    project.circuit.drapes = [
      { id: 'g', drawing: 'top.gbr', anchor: [18, -3.9, 24.69], turn: 10 },
      { id: 's', drawing: 'wave.svg', anchor: [42, 2, 24.9], origin: [10, -5], nets: { wave: 'W' } },
    ];
    change(project);
    const file = join(folder, 'half.drape.json');
    writeFileSync(file, JSON.stringify(project));
    return file;
  };
  const check = async (): Promise<Ended & { report: Report }> => {
    const ended = await runCli(['check', join(folder, 'half.drape.json'), '--json']);
    return { ...ended, report: ended.stdout ? JSON.parse(ended.stdout) : null };
  };
  beforeAll(() => {
    folder = emptyFolder();
    writeFileSync(join(folder, 'half.stl'), halfRound());
    writeFileSync(join(folder, 'top.gbr'), GERBER);
    writeFileSync(join(folder, 'wave.svg'), SVG);
    writeFileSync(join(folder, 'nets.ipc'), netlist('A'));
  });

  test('is laid at true length, with the nets and pins that its files name, and what was left out is told', async () => {
    put((p) => {
      p.netlist = 'nets.ipc';
    });
    const { report, status, stderr } = await check();
    expect(stderr).not.toMatch(/fault/i);
    const by = new Map(report.elements.map((e) => [e.id, e]));
    expect([...by.keys()]).toHaveLength(5);
    expect(report.elements.map((e) => e.net)).toEqual(['A', 'A', 'A', 'B', 'W']);
    const track = report.elements.find((e) => e.kind === 'trace' && e.net === 'A')!;
    // Developable: lengths hold to 0.1 %.
    expect(Math.abs(track.length / Math.hypot(12, 6) - 1)).toBeLessThan(1e-3);
    expect(track.stretch).toBeLessThan(5e-3);
    const pad = report.elements.find((e) => e.kind === 'pad' && e.net === 'B')!;
    expect(Math.abs(pad.area / Math.PI - 1)).toBeLessThan(2e-3);
    expect(report.drawings!.map((d) => [d.file, d.shapes])).toEqual([
      ['top.gbr', 4],
      ['wave.svg', 1],
    ]);
    expect(report.drawings![1].notes.map((n) => n.place)).toEqual([expect.stringContaining('line 3')]);
    expect(report.rules.filter((r) => r.rule === 'open' || r.rule === 'short')).toEqual([]);
    expect(status === 0 || status === 1).toBe(true);
  });

  test('a netlist that the copper does not follow is told pin by pin', async () => {
    writeFileSync(join(folder, 'wrong.ipc'), netlist('B'));
    put((p) => {
      p.netlist = 'wrong.ipc';
    });
    const { report, status } = await check();
    expect(status).toBe(1);
    const texts = report.rules.filter((r) => r.text).map((r) => [r.rule, r.text]);
    expect(texts).toEqual([
      ['open', 'wrong.ipc: net B is open: U1-1 and J1-2 are not joined'],
      ['short', 'wrong.ipc: nets A and B are joined: J1-1 and U1-1 are on copper that touches'],
    ]);
  });

  test('lines pulled straight are shortest ways between the corners of the drawing', async () => {
    put((p) => {
      Object.assign(p.circuit.drapes[0], { lay: 'pulled straight' });
    });
    const { report } = await check();
    const track = report.elements.find((e) => e.kind === 'trace' && e.net === 'A')!;
    expect(Math.abs(track.length / Math.hypot(12, 6) - 1)).toBeLessThan(1e-3);
  });

  test.each([
    [
      'a drawing that is none',
      'none.txt',
      'hello',
      /none\.txt: this is no drawing that can be read; give an SVG/,
    ],
    ['a drawing cut off in the middle', 'cut.svg', '<svg width="3mm"><path d="M0', /cut\.svg, line 1/],
    ['a drill file without units', 'no.drl', 'M48\nT1C0.8\n%\nT1\nX0127Y005\nM30\n', /no\.drl/],
  ])('%s is one sentence with its file, and nothing is written', async (_, name, text, says) => {
    writeFileSync(join(folder, name), text);
    put((p) => {
      p.circuit.drapes = [{ id: 'x', drawing: name, anchor: [18, -3.9, 24.69] }];
    });
    const ended = await runCli(['check', join(folder, 'half.drape.json')]);
    expect(ended.status).toBe(2);
    expect(ended.stderr).toMatch(says);
    expect(readFileSync(join(folder, name), 'utf8')).toBe(text);
  });
});

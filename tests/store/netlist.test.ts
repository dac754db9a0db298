import { beforeEach, describe, expect, test } from 'vitest';
import { writeProject } from '../../src/core/project/read.ts';
import type { Project } from '../../src/core/project/schema.ts';
import { createStore, type OpenedDrawing, type Store } from '../../src/store/store.ts';
import { domeHeight, domeProject, domeStl } from '../flows/dome.ts';
import { comb } from '../flows/drawings.ts';
import { fakeWorker, until } from './fakes.ts';

let store: Store;
const s = () => store.getState();
const bytes = (text: string) => new TextEncoder().encode(text);

/** Fixed columns of IPC-D-356A, µm. */
function record(net: string, part: string, pin: string, x: number, y: number): string {
  const number = (v: number) => `${v < 0 ? '-' : '+'}${String(Math.abs(v)).padStart(6, '0')}`;
  return `327${net.padEnd(14)}   ${part.padEnd(6)}-${pin.padEnd(4)}       A01X${number(x)}Y${number(y)}X2000Y0000R000 S0`;
}
/** Two points on the spine, one on the pad, which does not touch it. */
const netlist = [
  'P  UNITS CUST 1',
  record('S', 'J1', '1', 2000, -4000),
  record('S', 'U1', '1', 8000, -1100),
  record('T', 'J1', '2', 6000, -4000),
  '999',
  '',
].join('\n');

function project(): Project {
  const p = domeProject();
  p.circuit.elements = [];
  p.circuit.drapes = [
    {
      id: 'd1',
      drawing: 'comb.svg',
      anchor: [4, 5, domeHeight(4, 5)],
      origin: [4, -2],
      turn: 25,
      mirror: false,
      evenLengths: true,
      drawingLayers: {},
      nets: {},
    },
  ];
  p.netlist = 'far/nets.ipc';
  return p;
}
const open = (list: Uint8Array | null, problem = 'it is not there'): Promise<boolean> => {
  const files: OpenedDrawing[] = [
    { file: 'comb.svg', ref: 'r1', bytes: bytes(comb) },
    { file: 'far/nets.ipc', ref: list && 'r2', bytes: list, ...(list ? {} : { problem }) },
  ];
  const part = { ref: 'part', bytes: domeStl(20, 40) };
  return store.openProject(writeProject(project()), 'comb.drape.json', 'ref', part, files);
};
const joined = () => s().connections?.value;

beforeEach(() => {
  store = createStore({ heavy: fakeWorker().client, live: fakeWorker().client });
});

const TOLD = [
  'far/nets.ipc: net S is open: J1-1 and U1-1 are not joined',
  'far/nets.ipc: nets S and T are joined: J1-1 and J1-2 are on copper that touches',
];

describe('a project with a netlist', () => {
  test('is told of opens and shorts pin by pin, and exports what the window tells', async () => {
    await open(bytes(netlist));
    await until(() => joined() !== undefined);
    expect(joined()!.problems).toEqual([]);
    expect(joined()!.rules.map((r) => r.text)).toEqual(TOLD);
    const result = (await store.exportFiles(writeProject(s().project!)))!;
    const texts = result.report.rules
      .filter((r) => r.rule === 'open' || r.rule === 'short')
      .map((r) => r.text);
    expect(texts).toEqual(TOLD);
    const copy = result.files.find((f) => f.path === 'source/nets.ipc')!;
    expect(new TextDecoder().decode(copy.bytes)).toBe(netlist);
  }, 120_000);

  test('keeps it with its drawings when it is saved elsewhere', async () => {
    await open(bytes(netlist));
    expect(store.drawingsInUse().map((d) => d.file)).toEqual(['comb.svg', 'far/nets.ipc']);
    store.placeDrawings([
      { was: 'comb.svg', file: '../comb.svg', ref: 'r1' },
      { was: 'far/nets.ipc', file: '../far/nets.ipc', ref: 'r2' },
    ]);
    expect(s().project!.netlist).toBe('../far/nets.ipc');
    await until(() => s().connections?.revision === s().revision);
    expect(joined()!.rules.map((r) => r.text)).toEqual(TOLD.map((t) => `../${t}`));
  });

  test('without the file it says which one is missing and where, and shows the rest', async () => {
    await open(null);
    expect(s().notices.map((n) => n.text)).toEqual([
      'comb.drape.json: the netlist far/nets.ipc is missing: it is not there',
    ]);
    await until(() => joined() !== undefined);
    expect(joined()!.problems).toEqual([
      expect.objectContaining({
        code: 'no-drawing',
        place: '$.netlist',
        problem: 'far/nets.ipc is not there',
      }),
    ]);
    expect(s().copper!.value.elements).toHaveLength(3);
  });

  test('that is none gets the words of its reader', async () => {
    await open(bytes('Dear diary\n'));
    await until(() => joined() !== undefined);
    expect(joined()!.problems).toEqual([expect.objectContaining({ file: 'far/nets.ipc' })]);
    expect(joined()!.rules).toEqual([]);
  });
});

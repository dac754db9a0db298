/** Makes the demonstration: `node --import tsx assets/demo/make-dial.ts`. Same code, same bytes. */
import { createHash } from 'node:crypto';
import { readFileSync, writeFileSync } from 'node:fs';
import { createRequire } from 'node:module';
import { quiet } from '../../src/core/base/run-context.ts';
import { drapeCircuit } from '../../src/core/drape/drape.ts';
import { DEFAULTS } from '../../src/core/drawing/drawing.ts';
import { loadFlat } from '../../src/core/drawing/flat.ts';
import { readDrawing } from '../../src/core/drawing/read-drawing.ts';
import { loadPart } from '../../src/core/part/part.ts';
import { newProject } from '../../src/core/project/new-project.ts';
import type { Project } from '../../src/core/project/schema.ts';
import { dialDrapes, dialLinks } from './dial-circuit.ts';
import { electrodesSvg, tailGerber } from './dial-drawings.ts';
import { dialFacets } from './dial-shape.ts';

const facets = dialFacets(156, 56);
const count = facets.length / 9;
const stl = Buffer.alloc(84 + 50 * count);
stl.write('touch dial, mm');
stl.writeUInt32LE(count, 80);
for (let f = 0; f < count; f++) {
  const o = 84 + 50 * f;
  const v = facets.slice(9 * f, 9 * f + 9);
  const u = [v[3] - v[0], v[4] - v[1], v[5] - v[2]];
  const w = [v[6] - v[0], v[7] - v[1], v[8] - v[2]];
  const n = [u[1] * w[2] - u[2] * w[1], u[2] * w[0] - u[0] * w[2], u[0] * w[1] - u[1] * w[0]];
  const l = Math.hypot(n[0], n[1], n[2]);
  n.forEach((x, i) => {
    stl.writeFloatLE(x / l, o + 4 * i);
  });
  v.forEach((x, i) => {
    stl.writeFloatLE(x, o + 12 + 4 * i);
  });
}
const here = new URL('.', import.meta.url);
const drawings = { 'electrodes.svg': electrodesSvg(), 'tail.gbr': tailGerber() };
writeFileSync(new URL('dial.stl', here), stl);
for (const [name, text] of Object.entries(drawings)) writeFileSync(new URL(name, here), text);

// The dial stands turned by 20° about the optical axis and a little off the field's middle, the focal plane through its skirt.
const half = (10 * Math.PI) / 180;
const round = (x: number): number => Math.round(x * 1e9) / 1e9;
const example = newProject('dial.stl', null);
const project = {
  ...example,
  name: 'touch dial',
  part: { ...example.part, sha256: createHash('sha256').update(stl).digest('hex') },
  setups: [
    {
      name: 'top',
      pose: { rotate: [0, 0, round(Math.sin(half)), round(Math.cos(half))], move: [2.5, -1.5, -8] },
    },
  ],
  circuit: { elements: [], drapes: dialDrapes() },
};

// The drawings are laid once, to see where their lines end on the part: the links go on from there.
const wasm = createRequire(import.meta.url).resolve('manifold-3d/manifold.wasm');
const flat = await loadFlat(Uint8Array.from(readFileSync(wasm)));
const read = new Map(
  project.circuit.drapes.map((d) => {
    const text = drawings[d.drawing as keyof typeof drawings];
    return [
      d.id,
      readDrawing(new TextEncoder().encode(text), d.drawing, { ...DEFAULTS, unit: null }, flat, quiet),
    ];
  }),
);
const part = loadPart(Uint8Array.from(stl), 'dial.stl', 'mm', quiet);
const { copper } = drapeCircuit(project as unknown as Project, 'touch-dial.drape.json', part, quiet, read);
project.circuit.elements = dialLinks(copper.elements) as never[];
writeFileSync(new URL('touch-dial.drape.json', here), JSON.stringify(project, null, 2) + '\n');

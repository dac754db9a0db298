/** A small lopsided job on disk: the stone of the bench with few triangles, one trace, two pads, two layers. */
import { mkdirSync, readdirSync, readFileSync, statSync, writeFileSync } from 'node:fs';
import { join } from 'node:path';
import type { Vec3 } from '../../src/core/base/vec.ts';
import { stone, stoneProject, stoneStl } from '../bench/part.ts';
import { emptyFolder } from '../helpers/cli.ts';

// biome-ignore lint/suspicious/noExplicitAny: tests break the project in ways its type forbids.
export type AnyProject = any;

export interface JobOnDisk {
  folder: string;
  project: string;
}

export const placeOn = (u: number, v: number): { at: Vec3 } => ({ at: stone(u, v) });

/** @param change  what is to be different from a job in which every check holds */
export function putJob(change: (project: AnyProject) => void = () => {}): JobOnDisk {
  const folder = emptyFolder();
  const project: AnyProject = JSON.parse(JSON.stringify(stoneProject()));
  project.name = 'small job';
  project.part.file = '../parts/stone.stl';
  // Down the slope, so that two layers are needed; small, so that it is quick.
  project.circuit.elements = [
    { id: 't', kind: 'trace', net: 'N', width: 0.4, route: [placeOn(1.2, 0.6), placeOn(1.35, 1.1)] },
    { id: 'p', kind: 'pad', net: 'N', ...placeOn(1.2, 0.6), shape: { circle: 0.9 } },
    { id: 'q', kind: 'pad', net: 'N', ...placeOn(1.35, 1.1), shape: { rect: [0.8, 1.1] }, turn: 20 },
  ];
  change(project);
  mkdirSync(join(folder, 'jobs'));
  mkdirSync(join(folder, 'parts'));
  writeFileSync(join(folder, 'parts/stone.stl'), stoneStl(4000));
  const file = join(folder, 'jobs/small.drape.json');
  writeFileSync(file, JSON.stringify(project));
  return { folder, project: file };
}

/** Every file below a folder with its bytes, by path. */
export function filesBelow(dir: string, below = ''): Map<string, Buffer> {
  const out = new Map<string, Buffer>();
  for (const name of readdirSync(join(dir, below)).sort()) {
    const path = below + name;
    if (statSync(join(dir, path)).isDirectory())
      for (const [p, b] of filesBelow(dir, `${path}/`)) out.set(p, b);
    else out.set(path, readFileSync(join(dir, path)));
  }
  return out;
}

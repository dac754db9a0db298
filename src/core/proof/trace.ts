/** From a scan file to the places its pulses hit: the heavy half of the proof, one plain call a file. */
import { benchPoint, partPoint } from '../base/brands.ts';
import { InputError } from '../base/news.ts';
import { type Pose, poseFrame } from '../base/pose.ts';
import type { SurfaceMesh } from '../mesh/surface-mesh.ts';
import { type CornerNormals, normalAt } from '../part/normals.ts';
import type { Head } from '../project/schema.ts';
import { firstFace, rasterFaces } from './first-hit.ts';
import { beamAt, belowPivots, leanOf, towardHead } from './forward.ts';
import { layPulses } from './pulses.ts';
import { readCsv } from './reader-csv.ts';
import { readSvg } from './reader-svg.ts';

export type ProofFormat = 'svg' | 'csv';

/** Everything one file needs, as plain data: it may cross to another thread. */
export interface TraceTask {
  file: string;
  format: ProofFormat;
  bytes: Uint8Array;
  head: Head;
  /** Part → bench at stage offset 0. */
  pose: Pose;
  /** Stage offset while the file is burnt, mm, up positive. */
  offset: number;
  mesh: SurfaceMesh;
  normals: CornerNormals;
}

/** Pulses that meet the part, in the order they are fired. */
export interface LayerPulses {
  file: string;
  /** Field commands, mm, 2 a pulse. */
  command: Float64Array;
  /** Defocus where the pulse lands, mm. */
  d: Float64Array;
  /** Face it lands on. */
  face: Int32Array;
  /** Cosine of the incidence on the smoothed surface; not positive where it lands on a back. */
  cos: Float32Array;
  /** Share of the average power. */
  share: Float32Array;
  /** Pulses that met no part of the part. */
  missed: number;
  /** Pulses commanded outside the field: the head cannot follow, nothing is burnt. */
  outside: number;
}

/**
 * @throws InputError for a file that cannot be read, `not-yet`, `too-many-pulses`,
 *         `beyond-pivot` when the offset would lift the part to the beam's pivots
 */
export function tracePulses(task: TraceTask): LayerPulses {
  const { head, mesh, normals, offset } = task;
  const lean = leanOf(head);
  const path = task.format === 'svg' ? readSvg(task.bytes, task.file) : readCsv(task.bytes, task.file);
  const { command, share, outside } = layPulses(path, head.repetitionRate_kHz * 1000, head.field);
  const frame = poseFrame(task.pose);
  const standing = new Float64Array(mesh.positions.length);
  let top = -Infinity;
  for (let v = 0; v < standing.length; v += 3) {
    const p = frame.point(partPoint([mesh.positions[v], mesh.positions[v + 1], mesh.positions[v + 2]]));
    standing[v] = p[0];
    standing[v + 1] = p[1];
    standing[v + 2] = p[2] + offset;
    if (standing[v + 2] > top) top = standing[v + 2];
  }
  if (!belowPivots(lean, top))
    throw new InputError({
      code: 'beyond-pivot',
      file: task.file,
      place: '',
      problem: `at stage offset ${offset} mm the part would stand ${top.toFixed(1)} mm above the focal plane, at the pivots of the beam`,
      mend: 'check zOffset of this layer in report.json',
    });

  const raster = rasterFaces(standing, mesh.triangles, lean, boxOf(command));
  const all = share.length;
  const d = new Float64Array(all);
  const face = new Int32Array(all);
  const cos = new Float32Array(all);
  const hit = { face: -1, d: 0 };
  let n = 0;
  for (let i = 0; i < all; i++) {
    const X = command[2 * i];
    const Y = command[2 * i + 1];
    firstFace(raster, standing, mesh.triangles, lean, X, Y, hit);
    if (hit.face < 0) continue;
    const at = beamAt(lean, X, Y, hit.d);
    const place = frame.pointToPart(benchPoint([at[0], at[1], at[2] - offset]));
    const normal = frame.direction(normalAt(mesh, normals, hit.face, place));
    const u = towardHead(lean, X, Y);
    command[2 * n] = X;
    command[2 * n + 1] = Y;
    share[n] = share[i];
    d[n] = hit.d;
    face[n] = hit.face;
    cos[n++] = normal[0] * u[0] + normal[1] * u[1] + normal[2] * u[2];
  }
  return {
    file: task.file,
    command: command.slice(0, 2 * n),
    d: d.slice(0, n),
    face: face.slice(0, n),
    cos: cos.slice(0, n),
    share: share.slice(0, n),
    missed: all - n,
    outside,
  };
}

/** Least and greatest X, Y; a unit box about the origin when there is none. */
export function boxOf(command: Float64Array): [number, number, number, number] {
  if (command.length === 0) return [-0.5, -0.5, 0.5, 0.5];
  const box: [number, number, number, number] = [Infinity, Infinity, -Infinity, -Infinity];
  for (let i = 0; i < command.length; i += 2) {
    const x = command[i];
    const y = command[i + 1];
    if (x < box[0]) box[0] = x;
    if (y < box[1]) box[1] = y;
    if (x > box[2]) box[2] = x;
    if (y > box[3]) box[3] = y;
  }
  return box;
}

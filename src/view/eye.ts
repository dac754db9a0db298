/** Where the person looks from: a parallel projection about a target, +Z up. Plain numbers, no three. */
import type { Vec3 } from '../core/base/vec.ts';

export interface Eye {
  /** Bench frame, mm. */
  target: Vec3;
  /** Radians: the way from the target to the eye; yaw 0 looks from +X, pitch π/2 from above. */
  yaw: number;
  pitch: number;
  /** Half of what the viewport shows from bottom to top, mm. */
  half: number;
}

export interface Axes {
  right: Vec3;
  up: Vec3;
  /** From the target to the eye. */
  back: Vec3;
}

export function axesOf(eye: Eye): Axes {
  const [cy, sy, cp, sp] = [Math.cos(eye.yaw), Math.sin(eye.yaw), Math.cos(eye.pitch), Math.sin(eye.pitch)];
  return { right: [-sy, cy, 0], up: [-cy * sp, -sy * sp, cp], back: [cy * cp, sy * cp, sp] };
}

/** @param dx,dy  pixels, y down */
export function orbited(eye: Eye, dx: number, dy: number): Eye {
  const pitch = Math.max(-Math.PI / 2, Math.min(Math.PI / 2, eye.pitch + dy * 0.008));
  return { ...eye, yaw: eye.yaw - dx * 0.008, pitch };
}

/** @param height  of the viewport, px */
export function panned(eye: Eye, dx: number, dy: number, height: number): Eye {
  const { right, up } = axesOf(eye);
  const k = (2 * eye.half) / height;
  return {
    ...eye,
    target: [0, 1, 2].map((i) => eye.target[i]! - right[i]! * dx * k + up[i]! * dy * k) as unknown as Vec3,
  };
}

/** Zooms so that what lies under the pointer stays there. @param x,y  -1 … 1 from the middle, y up */
export function zoomed(eye: Eye, factor: number, x: number, y: number, aspect: number): Eye {
  const half = Math.max(0.05, Math.min(5000, eye.half * factor));
  const { right, up } = axesOf(eye);
  const d = eye.half - half;
  return {
    ...eye,
    half,
    target: [0, 1, 2].map(
      (i) => eye.target[i]! + right[i]! * x * aspect * d + up[i]! * y * d,
    ) as unknown as Vec3,
  };
}

/** Shows a ball. */
export function fitted(eye: Eye, middle: Vec3, radius: number, aspect: number): Eye {
  return { ...eye, target: middle, half: (Math.max(radius, 0.5) * 1.12) / Math.min(1, aspect) };
}

const D = Math.PI / 180;
/** Standard views by their names; `beam` looks down the optical axis with +X to the right. */
export const VIEWS = {
  corner: { yaw: -52 * D, pitch: 32 * D },
  front: { yaw: -90 * D, pitch: 0 },
  back: { yaw: 90 * D, pitch: 0 },
  left: { yaw: 180 * D, pitch: 0 },
  right: { yaw: 0, pitch: 0 },
  below: { yaw: -90 * D, pitch: -90 * D },
  beam: { yaw: -90 * D, pitch: 90 * D },
} as const;
export type ViewName = keyof typeof VIEWS;

/** Looks at a place along its normal, a little from the side. */
export function lookingAt(eye: Eye, place: Vec3, normal: Vec3): Eye {
  const flat = Math.hypot(normal[0], normal[1]);
  return {
    ...eye,
    target: place,
    yaw: flat > 1e-3 ? Math.atan2(normal[1], normal[0]) : eye.yaw,
    pitch: Math.atan2(normal[2], flat),
    half: Math.min(eye.half, 8),
  };
}

/** Ray through a place of the viewport. */
export function rayThrough(
  eye: Eye,
  x: number,
  y: number,
  aspect: number,
  far: number,
): { origin: Vec3; direction: Vec3 } {
  const { right, up, back } = axesOf(eye);
  const [a, b] = [x * eye.half * aspect, y * eye.half];
  return {
    origin: [0, 1, 2].map(
      (i) => eye.target[i]! + right[i]! * a + up[i]! * b + back[i]! * far,
    ) as unknown as Vec3,
    direction: [-back[0], -back[1], -back[2]],
  };
}

/** Where a place of the bench appears: x, y as in `rayThrough`. */
export function seenAt(eye: Eye, p: Vec3, aspect: number): [number, number] {
  const { right, up } = axesOf(eye);
  const d = [0, 1, 2].map((i) => p[i]! - eye.target[i]!);
  const dot = (v: Vec3) => v[0] * d[0]! + v[1] * d[1]! + v[2] * d[2]!;
  return [dot(right) / (eye.half * aspect), dot(up) / eye.half];
}

/** A step of the way from one eye to another, 0 … 1; the shorter way round. */
export function between(a: Eye, b: Eye, t: number): Eye {
  const turn = ((((b.yaw - a.yaw) % (2 * Math.PI)) + 3 * Math.PI) % (2 * Math.PI)) - Math.PI;
  const mix = (x: number, y: number) => x + (y - x) * t;
  return {
    target: [mix(a.target[0], b.target[0]), mix(a.target[1], b.target[1]), mix(a.target[2], b.target[2])],
    yaw: a.yaw + turn * t,
    pitch: mix(a.pitch, b.pitch),
    half: a.half * (b.half / a.half) ** t,
  };
}

/**
 * Moving and turning a drawing by hand: its outlines follow the pointer as a stiff card on the surface's tangent plane, and
 * the copper is laid anew when it is let go. What one hand did is one step of undo.
 */
import type { Vec3 } from '../core/base/vec.ts';
import type { Drape } from '../core/project/schema.ts';
import type { DrawingFrame, Probe } from '../worker/pictures.ts';
import type { Ray } from '../worker/session.ts';
import type { Act } from './document.ts';
import type { State } from './state.ts';

export interface CarryTools {
  get(): State;
  act(a: Act, gesture: string): void;
  pick(ray: Ray): Promise<Probe | null>;
  /** Axes of a drawing whose anchor is near to a place. */
  frame(at: Vec3): Promise<DrawingFrame>;
  preview(loops: readonly Float32Array[]): void;
  /** The hand is off: the copper is laid. */
  release(): void;
  fail(error: unknown, doing: string): void;
}

/** The copper is laid once wheel or keys have been still for so long, ms; a notch that comes soon after still belongs to the same turn. */
const STILL = 350;
const SOON = 2000;

interface Carry {
  id: string;
  gesture: string;
  /** Outlines as they lie, with the axes and the turn that they were laid by. */
  loops: readonly Float32Array[];
  before: Promise<{ frame: DrawingFrame; turn: number }>;
  waiting: Ray | null;
  running: Promise<void> | null;
  timer: ReturnType<typeof setTimeout> | undefined;
}

export function createCarrier(tools: CarryTools) {
  let carry: Carry | null = null;
  let count = 0;
  let turned = { id: '', gesture: '', when: 0 };

  const drapeOf = (id: string): Drape | undefined =>
    tools.get().project?.circuit.drapes.find((d) => d.id === id);

  function begin(id: string, gesture = `carry ${++count}`): Carry | null {
    if (carry?.id === id) return carry;
    const drape = drapeOf(id);
    if (!drape || carry) return null;
    const { copper } = tools.get();
    carry = {
      id,
      gesture,
      loops: (copper?.value.elements ?? []).filter((e) => e.drape === id).flatMap((e) => e.outline),
      before: tools.frame(drape.anchor).then((frame) => ({ frame, turn: drape.turn })),
      waiting: null,
      running: null,
      timer: undefined,
    };
    return carry;
  }

  async function show(mine: Carry, frame: DrawingFrame | null): Promise<void> {
    const { frame: first, turn } = await mine.before;
    const drape = drapeOf(mine.id);
    if (!drape || carry !== mine) return;
    const now = frame ?? first;
    tools.preview(mine.loops.map((loop) => carried(loop, first, turn, now, drape.turn)));
  }

  function end(): void {
    clearTimeout(carry?.timer);
    carry = null;
    tools.preview([]);
    tools.release();
  }

  return {
    busy: () => carry !== null,
    /** The anchor goes to where the ray meets the part. */
    drag(id: string, ray: Ray): void {
      const mine = begin(id);
      if (!mine) return;
      mine.waiting = ray;
      mine.running ??= (async () => {
        while (mine.waiting) {
          const next = mine.waiting;
          mine.waiting = null;
          const probe = await tools.pick(next);
          if (!probe || carry !== mine) continue;
          tools.act({ kind: 'move-drape', id, at: probe.at }, mine.gesture);
          await show(mine, probe.frame);
        }
        mine.running = null;
      })().catch((error) => tools.fail(error, 'Moving the drawing'));
    },
    async endDrag(): Promise<void> {
      await carry?.running;
      end();
    },
    /** @param by  degrees, counter-clockwise seen from outside */
    turn(id: string, by: number): void {
      const again = turned.id === id && performance.now() - turned.when < SOON;
      const mine = again ? begin(id, turned.gesture) : begin(id);
      const drape = drapeOf(id);
      if (!mine || !drape) return;
      turned = { id, gesture: mine.gesture, when: performance.now() };
      const turn = Math.round(1000 * ((((drape.turn + by) % 360) + 360) % 360)) / 1000;
      tools.act({ kind: 'edit-drape', id, what: 'turn', change: { turn } }, mine.gesture);
      void show(mine, null).catch((error) => tools.fail(error, 'Turning the drawing'));
      clearTimeout(mine.timer);
      mine.timer = setTimeout(end, STILL);
    },
  };
}

/** A line of places moved as a stiff body from one frame to another. Turns in degrees, about each frame's normal. */
export function carried(
  line: Float32Array,
  from: DrawingFrame,
  turnFrom: number,
  to: DrawingFrame,
  turnTo: number,
): Float32Array {
  const [a, b] = [axes(from, turnFrom), axes(to, turnTo)];
  const out = new Float32Array(line.length);
  for (let i = 0; i < line.length; i += 3) {
    const d = [0, 1, 2].map((k) => line[i + k]! - from.at[k]!);
    const c = a.map((axis) => axis[0]! * d[0]! + axis[1]! * d[1]! + axis[2]! * d[2]!);
    for (let k = 0; k < 3; k++)
      out[i + k] = to.at[k]! + c[0]! * b[0]![k]! + c[1]! * b[1]![k]! + c[2]! * b[2]![k]!;
  }
  return out;
}

function axes({ u, normal: n }: DrawingFrame, turn: number): Vec3[] {
  const v: Vec3 = [n[1] * u[2] - n[2] * u[1], n[2] * u[0] - n[0] * u[2], n[0] * u[1] - n[1] * u[0]];
  const [c, s] = [Math.cos((turn * Math.PI) / 180), Math.sin((turn * Math.PI) / 180)];
  return [
    [c * u[0] + s * v[0], c * u[1] + s * v[1], c * u[2] + s * v[2]],
    [c * v[0] - s * u[0], c * v[1] - s * u[1], c * v[2] - s * u[2]],
    [n[0], n[1], n[2]],
  ];
}

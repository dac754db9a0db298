/**
 * Moving and turning a drawing by hand: its lines follow the pointer over the surface as they would lie there, and the copper
 * is laid anew when it is let go. What one hand did is one step of undo.
 */
import type { Vec2 } from '../core/base/vec.ts';
import type { Drape } from '../core/project/schema.ts';
import type { FlatPicture, Probe } from '../worker/pictures.ts';
import type { Ray, SketchAsked } from '../worker/session.ts';
import type { Act } from './document.ts';
import type { State } from './state.ts';

export interface CarryTools {
  get(): State;
  act(a: Act, gesture: string): void;
  pick(ray: Ray): Promise<Probe | null>;
  /** Lines of a drawing as they would run on the part. */
  sketch(asked: SketchAsked): Promise<Float32Array[]>;
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
  /** Lines of the drawing about its origin, 2 a point; none while it was never read. */
  lines: readonly Float32Array[];
  /** Whether a sketch is asked for, and another is wanted after it. */
  sketching: boolean;
  again: boolean;
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
    const read = tools.get().copper?.value.drawings.find((d) => d.drape === id);
    carry = {
      id,
      gesture,
      lines: read ? linesAbout(read.flat, drape.origin) : [],
      sketching: false,
      again: false,
      waiting: null,
      running: null,
      timer: undefined,
    };
    return carry;
  }

  /** Sketches the drawing where it is now; while one sketch is made, the next waits, and those between are left out. */
  async function show(mine: Carry): Promise<void> {
    mine.again = true;
    if (mine.sketching || mine.lines.length === 0) return;
    mine.sketching = true;
    while (mine.again && carry === mine) {
      mine.again = false;
      const drape = drapeOf(mine.id);
      if (!drape) break;
      const { anchor: at, turn, mirror } = drape;
      const lines = await tools.sketch({ at, turn, mirror, lines: mine.lines });
      if (carry === mine) tools.preview(lines);
    }
    mine.sketching = false;
  }

  function end(): void {
    clearTimeout(carry?.timer);
    carry = null;
    // What was sketched last stays in sight until the copper lies there (`follow.ts`).
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
          await show(mine);
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
      void show(mine).catch((error) => tools.fail(error, 'Turning the drawing'));
      clearTimeout(mine.timer);
      mine.timer = setTimeout(end, STILL);
    },
  };
}

/** The lines and outlines of a flat drawing, each closed where it is drawn so, moved so that `origin` is at 0. */
function linesAbout({ shapes, points, ends }: FlatPicture, [ou, ov]: Vec2): Float32Array[] {
  return shapes.flatMap(({ first, count, closed }) =>
    Array.from({ length: count }, (_, k) => {
      const ring = first + k;
      const own = points.subarray(2 * (ring > 0 ? ends[ring - 1]! : 0), 2 * ends[ring]!);
      const line = closed ? [...own, own[0]!, own[1]!] : own;
      return Float32Array.from(line, (x, i) => x - (i % 2 === 0 ? ou : ov));
    }),
  );
}

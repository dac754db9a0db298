/** The viewport: draws the store, and turns mouse and keys into acts. Draws only when something changed. */

import { partPoint } from '../core/base/brands.ts';
import { poseFrame } from '../core/base/pose.ts';
import type { Vec3 } from '../core/base/vec.ts';
import type { Drape } from '../core/project/schema.ts';
import { normalNear, STRETCHES, selectedDrape, stretchLook } from '../store/drapes.ts';
import { plainDepth } from '../store/looks.ts';
import { current, type State } from '../store/state.ts';
import { type Ray, type Store, setupsOf } from '../store/store.ts';
import {
  axesOf,
  between,
  type Eye,
  fitted,
  lookingAt,
  orbited,
  panned,
  rayThrough,
  seenAt,
  VIEWS,
  type ViewName,
  zoomed,
} from './eye.ts';
import { SCHEMES } from './palette.ts';
import { createScene } from './scene.ts';

export interface Viewport {
  fit(): void;
  look(name: ViewName): void;
  /** Turns to a place of the part, seen along its normal. */
  showPlace(point: Vec3, normal: Vec3): void;
  /** Turns to the first of these elements if none of them faces the eye within the picture. */
  reveal(ids: readonly string[]): void;
  /** Rays to the part: through a place of the page where it lies in the viewport, and through the middle. Part frame. */
  rays(at: { x: number; y: number } | null): Ray[];
  toggle(what: 'plane' | 'lens' | 'cut'): void;
  shows(what: 'plane' | 'lens' | 'cut'): boolean;
  /** Where the keyboard's cross stands, or null while the mouse leads. */
  dispose(): void;
}

/** Pointer travel that still counts as a click, px. */
const STILL = 5;
/** How near to a pad's rim or a handle counts as on it, px. */
const SNAP = 10;
/** One notch of the wheel, or one arrow, turns a drawing by this, degrees. */
const NOTCH = 5;
/** Triangles above which moving pictures are drawn coarser. */
const MANY = 60_000;

export function createViewport(canvas: HTMLCanvasElement, overlay: HTMLElement, store: Store): Viewport {
  const scene = createScene(canvas);
  let eye: Eye = { target: [0, 0, 0], ...VIEWS.corner, half: 50 };
  let width = 1;
  let height = 1;
  let wanted = 0;
  let moving = 0;
  let shown: State | null = null;
  const flags = { plane: true, lens: false, cut: false };
  const dark = matchMedia('(prefers-color-scheme: dark)');
  const still = matchMedia('(prefers-reduced-motion: reduce)');

  const get = store.getState;
  const setup = (s: State) => (s.project ? setupsOf(s.project)[s.setup]! : null);
  const frameOf = (s: State) => poseFrame(setup(s)?.pose ?? { rotate: [0, 0, 0, 1], move: [0, 0, 0] });

  // --- drawing -----------------------------------------------------------------------------------

  const redraw = () => {
    if (wanted === 0) wanted = requestAnimationFrame(paint);
  };

  function paint(): void {
    wanted = 0;
    if (width < 2 || height < 2) return;
    const triangles = (get().part?.triangles ?? 0) + (get().copper?.value.area.length ?? 0);
    const coarse = performance.now() < moving && triangles > MANY;
    scene.draw(eye, width, height, devicePixelRatio * (coarse ? 0.5 : 1));
    placeHandles();
    overlay.dataset['drawn'] = String(Number(overlay.dataset['drawn'] ?? 0) + 1);
  }

  let settle: ReturnType<typeof setTimeout> | undefined;
  function move(next: Eye): void {
    eye = next;
    moving = performance.now() + 180;
    clearTimeout(settle);
    settle = setTimeout(redraw, 200);
    redraw();
  }

  /** Glides where motion is welcome, jumps where it is not. */
  function glide(next: Eye): void {
    if (still.matches) {
      move(next);
      return;
    }
    const from = eye;
    const begin = performance.now();
    const step = () => {
      const t = Math.min(1, (performance.now() - begin) / 220);
      move(between(from, next, t * t * (3 - 2 * t)));
      if (t < 1) requestAnimationFrame(step);
    };
    step();
  }

  function follow(s: State): void {
    const before = shown;
    shown = s;
    let visible = false;
    const changed = (f: (s: State) => unknown) => {
      const is = !before || f(before) !== f(s);
      visible ||= is;
      return is;
    };
    if (changed((x) => x.part)) {
      scene.setPart(s.part);
      if (s.part) {
        if (s.project) scene.setPose(setup(s)!);
        fitView(false);
      }
    }
    if (changed((x) => setup(x))) {
      if (s.project) scene.setPose(setup(s)!);
    }
    if (changed((x) => x.project?.head) && s.project) scene.setHead(s.project.head);
    const copperChanged = changed((x) => x.copper) || changed((x) => x.setup);
    const { copper, reach, plan } = current(s);
    if (copperChanged) scene.setCopper(copper, s.setup);
    if (
      copper &&
      s.project &&
      (copperChanged ||
        changed((x) => x.reach) ||
        changed((x) => x.plan) ||
        changed((x) => x.project?.limits))
    )
      scene.setReach(copper, reach, plan, plainDepth(s.project.limits, reach));
    if (copper && s.project && (copperChanged || changed((x) => x.project?.limits))) {
      const { limits } = s.project;
      scene.setStretch(copper, (e) =>
        e.drape === null ? -1 : STRETCHES.indexOf(stretchLook(e.stretch, limits)),
      );
    }
    if (copperChanged || changed((x) => x.selection)) {
      const ids = new Set(s.selection);
      scene.setChosen(
        (copper?.elements ?? [])
          .filter((e) => ids.has(e.id) || (e.drape !== null && ids.has(e.drape)))
          .flatMap((e) => e.outline),
      );
    }
    if (copperChanged || changed((x) => x.pointed))
      scene.setPointed(copper?.elements.find((e) => e.id === s.pointed)?.outline ?? []);
    if (changed((x) => x.tool) || changed((x) => x.preview))
      scene.setLive(
        s.tool.kind === 'trace'
          ? [...s.tool.runs, ...(s.tool.live?.points ? [s.tool.live.points] : [])]
          : s.preview,
      );
    const nothingElse = !visible;
    if (changed((x) => x.hover) || changed((x) => x.offset)) {
      const frame = frameOf(s);
      const p = s.hover && flags.lens ? frame.point(partPoint(s.hover.probe.point)) : null;
      const [px, py] = s.project?.head.pivot ?? [null, null];
      const up = (s.project?.head.workingDistance ?? 0) - s.offset;
      scene.setBeam(
        p,
        p ? [p[0] - (px ? (p[0] / px) * up : 0), p[1] - (py ? (p[1] / py) * up : 0), up] : null,
      );
    }
    if (nothingElse && !flags.lens && before?.offset === s.offset) visible = false;
    if (changed((x) => x.show) || changed((x) => x.isolated) || changed((x) => x.stretchShown) || visible) {
      look();
      redraw();
    }
  }

  function look(): void {
    const s = get();
    scene.setView({
      offset: s.offset,
      atOffset: s.show === 'offset',
      alone: s.isolated ?? -1,
      stretch: s.stretchShown,
      plane: flags.plane && s.project !== null,
      lens: flags.lens && s.project !== null,
      // The half towards the eye is taken away, on the axis that the eye looks along most.
      cut: flags.cut ? cutting() : null,
    });
  }

  function cutting(): [number, number, number, number] {
    const n: [number, number] = [Math.cos(eye.yaw), Math.sin(eye.yaw)];
    return Math.abs(n[0]) > Math.abs(n[1]) ? [Math.sign(n[0]), 0, 0, 0] : [0, Math.sign(n[1]), 0, 0];
  }

  function scheme(): void {
    scene.setScheme(SCHEMES[dark.matches ? 'dark' : 'light']);
    redraw();
  }

  // --- looking -----------------------------------------------------------------------------------

  function fitView(smooth = true): void {
    const s = get();
    if (!s.part) return;
    const frame = frameOf(s);
    const [lo, hi] = s.part.bounds;
    const corners = [0, 1, 2, 3, 4, 5, 6, 7].map((i) =>
      frame.point(partPoint([i & 1 ? hi[0] : lo[0], i & 2 ? hi[1] : lo[1], i & 4 ? hi[2] : lo[2]])),
    );
    const middle = [0, 1, 2].map(
      (k) => (Math.min(...corners.map((c) => c[k]!)) + Math.max(...corners.map((c) => c[k]!))) / 2,
    ) as unknown as Vec3;
    // As tight as the box allows from where the eye stands.
    const flat = fitted(eye, middle, 1, 1);
    const reach = Math.max(
      ...corners.map((c) => {
        const [x, y] = seenAt({ ...flat, half: 1 }, c, 1);
        return Math.max(Math.abs(x) / (width / height), Math.abs(y));
      }),
    );
    const next = { ...eye, target: middle, half: Math.max(0.5, reach * 1.15) };
    if (smooth) glide(next);
    else move(next);
  }

  const inBench = (p: Vec3): Vec3 => frameOf(get()).point(partPoint(p));

  const place = (x: number, y: number): [number, number] => [(2 * x) / width - 1, 1 - (2 * y) / height];

  /** Ray through a pixel, part frame. */
  function rayAt(x: number, y: number) {
    const ray = rayThrough(eye, ...place(x, y), width / height, 1500);
    const frame = frameOf(get());
    return {
      origin: frame.pointToPart(ray.origin as never),
      direction: frame.directionToPart(ray.direction),
    };
  }

  const mmPerPixel = () => (2 * eye.half) / height;

  // --- handles -----------------------------------------------------------------------------------

  /** The places of the one selected element, and of the run in hand. */
  function handlePlaces(s: State): Vec3[] {
    if (s.tool.kind === 'trace') return s.tool.route;
    if (s.tool.kind !== 'look' || s.selection.length !== 1) return [];
    const drape = selectedDrape(s.project, s.selection);
    if (drape) return [drape.anchor];
    const e = s.project?.circuit.elements.find((x) => x.id === s.selection[0]);
    return !e ? [] : e.kind === 'pad' ? [e.at] : (e.kind === 'trace' ? e.route : e.outline).map((r) => r.at);
  }

  const dots: HTMLElement[] = [];
  const cross = document.createElement('div');
  cross.className = 'cross';
  cross.hidden = true;
  overlay.append(cross);

  function placeHandles(): void {
    const places = handlePlaces(get());
    overlay.classList.toggle('many', places.length > 8);
    while (dots.length < places.length) {
      const dot = document.createElement('div');
      dot.className = 'handle';
      overlay.append(dot);
      dots.push(dot);
    }
    dots.forEach((dot, i) => {
      const p = places[i];
      dot.hidden = p === undefined;
      if (!p) return;
      const [x, y] = onScreen(p);
      dot.style.transform = `translate(${x}px, ${y}px)`;
    });
  }

  function onScreen(p: Vec3): [number, number] {
    const [x, y] = seenAt(eye, inBench(p), width / height);
    return [((x + 1) / 2) * width, ((1 - y) / 2) * height];
  }

  function handleAt(x: number, y: number): number {
    if (get().tool.kind !== 'look') return -1;
    return handlePlaces(get()).findIndex((p) => {
      const [a, b] = onScreen(p);
      return Math.hypot(a - x, b - y) < SNAP;
    });
  }

  /** The selected drawing, if its copper or its anchor is under the pointer. */
  function drapeUnder(x: number, y: number): Drape | null {
    const s = get();
    const drape = s.tool.kind === 'look' ? selectedDrape(s.project, s.selection) : null;
    if (!drape || handleAt(x, y) >= 0) return drape;
    const over = s.hover && s.hover.element >= 0 ? s.copper?.value.elements[s.hover.element] : undefined;
    return over?.drape === drape.id ? drape : null;
  }

  // --- mouse -------------------------------------------------------------------------------------

  interface Grip {
    id: number;
    x: number;
    y: number;
    lastX: number;
    lastY: number;
    button: number;
    pan: boolean;
    moved: boolean;
    handle: number;
    element: string;
    /** The drawing in hand, and its anchor on the screen from the pointer, px. */
    drape: { id: string; dx: number; dy: number } | null;
  }
  let grip: Grip | null = null;
  /** Where the pointer is over the viewport, px. */
  let pointer: [number, number] | null = null;
  let lastClick = { time: 0, x: 0, y: 0 };
  const snap = () => SNAP * mmPerPixel();
  const local = (e: MouseEvent): [number, number] => {
    const box = canvas.getBoundingClientRect();
    return [e.clientX - box.left, e.clientY - box.top];
  };

  const onDown = (e: PointerEvent) => {
    canvas.focus({ preventScroll: true });
    cross.hidden = true;
    const [x, y] = local(e);
    const handle = e.button === 0 ? handleAt(x, y) : -1;
    const drape = e.button === 0 && !e.shiftKey ? drapeUnder(x, y) : null;
    const [ax, ay] = drape ? onScreen(drape.anchor) : [x, y];
    grip = {
      id: e.pointerId,
      x,
      y,
      lastX: x,
      lastY: y,
      button: e.button,
      moved: false,
      handle,
      pan: e.button === 1 || e.button === 2 || e.shiftKey,
      element: get().selection[0] ?? '',
      drape: drape && { id: drape.id, dx: ax - x, dy: ay - y },
    };
    canvas.setPointerCapture(e.pointerId);
  };

  const onMove = (e: PointerEvent) => {
    const [x, y] = local(e);
    pointer = [x, y];
    if (!grip) {
      cursor(x, y);
      store.point(rayAt(x, y), snap());
      return;
    }
    if (!grip.moved && Math.hypot(x - grip.x, y - grip.y) < STILL) return;
    grip.moved = true;
    if (grip.drape) store.dragDrape(grip.drape.id, rayAt(x + grip.drape.dx, y + grip.drape.dy));
    else if (grip.handle >= 0) store.drag(grip.element, grip.handle, rayAt(x, y), snap());
    else if (grip.pan) move(panned(eye, x - grip.lastX, y - grip.lastY, height));
    else move(orbited(eye, x - grip.lastX, y - grip.lastY));
    grip.lastX = x;
    grip.lastY = y;
  };

  const onUp = (e: PointerEvent) => {
    const [x, y] = local(e);
    const g = grip;
    grip = null;
    if (!g) return;
    if (g.moved) {
      if (g.drape) void store.endDrapeDrag();
      else if (g.handle >= 0) void store.endDrag();
      if (flags.cut) look();
      return;
    }
    if (g.button !== 0 || g.handle >= 0) return;
    const twice =
      performance.now() - lastClick.time < 350 && Math.hypot(x - lastClick.x, y - lastClick.y) < STILL;
    lastClick = { time: performance.now(), x, y };
    // The second click of a double click stands where the first stood: it ends the trace and adds no place.
    if (twice && get().tool.kind === 'trace') return void store.finish();
    void store.press(rayAt(x, y), snap(), e.shiftKey || e.ctrlKey || e.metaKey);
  };

  const onWheel = (e: WheelEvent) => {
    e.preventDefault();
    const [x, y] = place(...local(e));
    const lines = e.deltaMode === 1 ? e.deltaY * 16 : e.deltaY;
    const drape = e.ctrlKey ? null : drapeUnder(...local(e));
    if (drape) return store.turnDrape(drape.id, (e.altKey ? 0.1 : 1) * Math.sign(-lines) * NOTCH);
    move(zoomed(eye, Math.exp(Math.max(-60, Math.min(60, lines)) * 0.0035), x, y, width / height));
  };

  const onLeave = () => {
    pointer = null;
    if (!grip) store.point(null, 0);
  };
  const noMenu = (e: Event) => e.preventDefault();

  function cursor(x: number, y: number): void {
    const tool = get().tool.kind;
    canvas.style.cursor =
      tool !== 'look' ? 'crosshair' : handleAt(x, y) >= 0 || drapeUnder(x, y) ? 'move' : 'default';
  }

  // --- keys --------------------------------------------------------------------------------------

  /** With a tool in hand the arrows move a cross, else they turn the view. */
  const onKey = (e: KeyboardEvent) => {
    if (e.ctrlKey || e.metaKey) return;
    const arrow = { ArrowLeft: [-1, 0], ArrowRight: [1, 0], ArrowUp: [0, -1], ArrowDown: [0, 1] }[e.key];
    const { tool } = get();
    if (arrow && tool.kind !== 'look') {
      const far = e.altKey ? 1 : e.shiftKey ? 32 : 8;
      setCross(crossAt[0] + arrow[0]! * far, crossAt[1] + arrow[1]! * far);
    } else if (arrow && arrow[0] !== 0 && turnable(e.altKey)) {
      store.turnDrape(turnable(e.altKey)!.id, -arrow[0]! * (e.shiftKey ? 0.1 : 1) * NOTCH);
    } else if (arrow) {
      if (e.shiftKey) move(panned(eye, arrow[0]! * -30, arrow[1]! * -30, height));
      else move(orbited(eye, arrow[0]! * 18, arrow[1]! * 18));
    } else if (e.key === '+' || e.key === '=') move(zoomed(eye, 0.85, 0, 0, 1));
    else if (e.key === '-' || e.key === '_') move(zoomed(eye, 1 / 0.85, 0, 0, 1));
    else if (e.key === ' ' && tool.kind !== 'look') {
      if (cross.hidden) setCross(width / 2, height / 2);
      void store.press(rayAt(...crossAt), snap(), false);
    } else return;
    e.preventDefault();
    e.stopPropagation();
  };
  /** The selected drawing, if arrows are to turn it: with Alt, or while the pointer is over it. */
  function turnable(alt: boolean): Drape | null {
    const s = get();
    return alt ? selectedDrape(s.project, s.selection) : pointer ? drapeUnder(...pointer) : null;
  }

  let crossAt: [number, number] = [0, 0];
  function setCross(x: number, y: number): void {
    if (cross.hidden) [x, y] = [width / 2, height / 2];
    crossAt = [Math.max(0, Math.min(width, x)), Math.max(0, Math.min(height, y))];
    cross.hidden = false;
    cross.style.transform = `translate(${crossAt[0]}px, ${crossAt[1]}px)`;
    store.point(rayAt(...crossAt), snap());
  }

  canvas.addEventListener('pointerdown', onDown);
  canvas.addEventListener('pointermove', onMove);
  canvas.addEventListener('pointerup', onUp);
  canvas.addEventListener('pointercancel', onUp);
  canvas.addEventListener('pointerleave', onLeave);
  canvas.addEventListener('wheel', onWheel, { passive: false });
  canvas.addEventListener('contextmenu', noMenu);
  canvas.addEventListener('keydown', onKey);
  dark.addEventListener('change', scheme);

  const size = new ResizeObserver(() => {
    const first = width === 1;
    width = canvas.clientWidth;
    height = canvas.clientHeight;
    if (first) fitView(false);
    // At once, so that a resized canvas is never seen empty.
    paint();
  });
  size.observe(canvas);
  const leave = store.subscribe(follow);
  scheme();
  follow(get());

  return {
    fit: () => fitView(),
    look(name) {
      glide({ ...eye, ...VIEWS[name] });
    },
    showPlace(point, normal) {
      const frame = frameOf(get());
      glide(lookingAt(eye, frame.point(partPoint(point)), frame.direction(normal)));
    },
    reveal(ids) {
      const { copper } = current(get());
      if (!copper) return;
      const wanted = new Set(ids);
      const found = copper.elements.filter((e) => wanted.has(e.id) && e.count > 0);
      const frame = frameOf(get());
      const { back } = axesOf(eye);
      const seen = found.some((e) => {
        const [x, y] = seenAt(eye, inBench(e.anchor), width / height);
        const n = frame.direction(normalNear(copper, e, e.anchor));
        return Math.abs(x) < 1 && Math.abs(y) < 1 && n[0] * back[0] + n[1] * back[1] + n[2] * back[2] > 0;
      });
      const [first] = found;
      if (first && !seen) this.showPlace(first.anchor, normalNear(copper, first, first.anchor));
    },
    rays(at) {
      const box = canvas.getBoundingClientRect();
      const [x, y] = at ? [at.x - box.left, at.y - box.top] : [-1, -1];
      const inside = x >= 0 && y >= 0 && x < width && y < height;
      return [...(inside ? [rayAt(x, y)] : []), rayAt(width / 2, height / 2)];
    },
    toggle(what) {
      flags[what] = !flags[what];
      look();
      redraw();
    },
    shows: (what) => flags[what],
    dispose() {
      leave();
      size.disconnect();
      cancelAnimationFrame(wanted);
      dark.removeEventListener('change', scheme);
      canvas.removeEventListener('pointerdown', onDown);
      canvas.removeEventListener('pointermove', onMove);
      canvas.removeEventListener('pointerup', onUp);
      canvas.removeEventListener('pointercancel', onUp);
      canvas.removeEventListener('pointerleave', onLeave);
      canvas.removeEventListener('wheel', onWheel);
      canvas.removeEventListener('contextmenu', noMenu);
      canvas.removeEventListener('keydown', onKey);
      scene.dispose();
    },
  };
}

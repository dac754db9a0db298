/** The store: state, acts with undo, drawing, and the derived results that follow the document. No React here. */
import { type StoreApi, createStore as zustandStore } from 'zustand/vanilla';
import type { Vec2, Vec3 } from '../core/base/vec.ts';
import { newProject } from '../core/project/new-project.ts';
import type { Drape, Element, Project, Setup } from '../core/project/schema.ts';
import { problemsOf, type WorkerClient, WorkFailure, wasStopped } from '../worker/client.ts';
import type { CopperPicture, LiveRun, PartPicture, Probe } from '../worker/pictures.ts';
import type { Ray } from '../worker/session.ts';
import { createCarrier } from './carry.ts';
import { type Act, apply, freeId, lastName, nameOf } from './document.ts';
import { createFollower, filesOf } from './follow.ts';
import { noHistory, record, redo, seal, undo } from './history.ts';
import { lookingActs } from './looking.ts';
import { copperAt } from './margins.ts';
import {
  current,
  firstState,
  type HeldDrawing,
  hasCircuit,
  isUnsaved,
  type Notice,
  type Origin,
  type State,
  type Tool,
} from './state.ts';

export type { Ray } from '../worker/session.ts';
export type Store = ReturnType<typeof createStore>;

export interface Workers {
  /** Long work: drape, reach, plan, export. */
  heavy: WorkerClient;
  /** What must answer while the pointer moves. */
  live: WorkerClient;
}

export function createStore(workers: Workers) {
  const api: StoreApi<State> = zustandStore<State>(() => firstState);
  const get = api.getState;
  const set = api.setState;
  const follower = createFollower(api, workers.heavy, (error, doing) => fail(error, doing));
  let notices = 0;
  let opening = 0;

  const notify = (level: Notice['level'], text: string, mend = '') =>
    set((s) => ({ notices: [...s.notices, { id: ++notices, level, text, mend }].slice(-6) }));

  /** Shows what went wrong; what the person stopped is no news. */
  function fail(error: unknown, doing: string): void {
    if (wasStopped(error)) return;
    if (error instanceof WorkFailure && error.failure.kind === 'input') {
      for (const p of error.failure.problems.slice(0, 4))
        notify('problem', `${p.file}${p.place ? `, ${p.place}` : ''}: ${p.problem}`, p.mend);
      return;
    }
    const news = (error as { news?: { problem: string; mend: string } }).news;
    if (news) {
      notify('problem', news.problem, news.mend);
      return;
    }
    notify(
      'fault',
      `${doing} failed by a mistake of this program: ${(error as Error).message}`,
      'your work is kept; save it under another name',
    );
  }

  /** The document after an act. `gesture` joins the acts of one drag into one step. */
  function act(a: Act, gesture: string | null = null): void {
    const s = get();
    if (!s.project) return;
    const after = apply(s.project, a);
    if (after === s.project) return;
    set({ history: record(s.history, nameOf(a), s.project, after, gesture) });
    become(after);
  }

  function become(project: Project): void {
    const s = get();
    const { elements, drapes } = project.circuit;
    const ids = new Set([...elements, ...drapes].map((e) => e.id));
    const selection = s.selection.filter(
      (id) => ids.has(id) || drapes.some((d) => id.startsWith(`${d.id}/`)),
    );
    set({
      project,
      revision: s.revision + 1,
      selection: selection.length === s.selection.length ? s.selection : selection,
      setup: Math.min(s.setup, setupsOf(project).length - 1),
    });
    if (s.project && project.part.units !== s.project.part.units) void reopenPart();
    else if (!dragging && !carrier.busy()) follower.wake();
  }

  async function reopenPart(): Promise<void> {
    const s = get();
    if (!s.project || !s.origin.partBytes) return;
    try {
      set({ part: await readPart(s.origin.partBytes, s.project) });
      follower.wake();
    } catch (error) {
      fail(error, 'Reading the part');
    }
  }

  async function readPart(bytes: Uint8Array, project: Project): Promise<PartPicture> {
    const argument = { bytes, file: project.part.file, units: project.part.units };
    const done = busy('Reading the part');
    try {
      const [picture] = await Promise.all([
        workers.heavy.call('openPart', argument, done.hear),
        workers.live.call('openPart', argument),
      ]);
      return picture;
    } finally {
      done.end();
    }
  }

  function busy(what: string) {
    const mine = { what, share: null, since: performance.now() };
    set({ busy: mine });
    return {
      hear: (p: { done: number; of: number }) =>
        set({ busy: { ...mine, share: p.of > 0 ? p.done / p.of : null } }),
      end: () => set((s) => (s.busy?.since === mine.since ? { busy: null } : s)),
    };
  }

  /** A document in place of the one before, with nothing left of it. */
  async function show(
    project: Project,
    origin: Origin,
    bytes: Uint8Array | null,
    drawings: State['drawings'] = {},
  ): Promise<boolean> {
    const mine = ++opening;
    workers.heavy.stopAll();
    try {
      const picture = bytes ? await readPart(bytes, project) : null;
      if (mine !== opening) return false;
      const s = get();
      set({
        ...firstState,
        project,
        origin: { ...origin, partBytes: bytes },
        drawings,
        part: picture,
        revision: s.revision + 1,
        notices: [],
        pen: s.pen,
        history: noHistory,
        step: picture ? (hasCircuit(project) ? 'reach' : 'circuit') : 'part',
      });
      follower.wake();
      return true;
    } catch (error) {
      fail(error, 'Opening');
      return false;
    }
  }

  function select(ids: readonly string[]): void {
    set({ selection: ids });
  }

  function setTool(kind: Tool['kind']): void {
    set({
      tool: kind === 'trace' ? { kind, route: [], runs: [], live: null } : { kind },
      selection: kind === 'look' ? get().selection : [],
    });
  }

  // --- drawing ---------------------------------------------------------------------------------

  let asked = 0;
  let waiting: Ray | null = null;
  let inFlight = false;

  /** Follows the pointer: only the last place asked for is answered. Null takes the hover away. */
  function point(ray: Ray | null, snap: number): void {
    waiting = ray;
    asked++;
    if (ray === null) {
      if (get().hover) set({ hover: null });
      return;
    }
    if (!inFlight) void follow(snap);
  }

  async function follow(snap: number): Promise<void> {
    inFlight = true;
    try {
      while (waiting) {
        const ray = waiting;
        const mine = asked;
        waiting = null;
        const probe = await pick(ray);
        if (mine !== asked && waiting === null) break;
        hoverAt(probe);
        const { tool } = get();
        if (tool.kind !== 'trace' || tool.route.length === 0) continue;
        if (!probe) {
          set({ tool: { ...tool, live: null } });
          continue;
        }
        const to = snapped(probe, snap);
        const from = tool.route[tool.route.length - 1]!;
        const hold = { hand: `draw ${tool.route.length} from ${from.join()}`, name: 'live' };
        const show = (run: LiveRun) => {
          const now = get().tool;
          if (now.kind === 'trace' && now.route === tool.route)
            set({ tool: { ...now, live: { to, ...run } } });
        };
        const glance = await workers.live.call('glance', { from, to, hold });
        show(glance);
        // A far way is looked into once the pointer rests.
        for (let t = 0; !glance.sure && waiting === null && t < REST; t += FRAME) await pause(FRAME);
        if (!glance.sure && waiting === null) show(await workers.live.call('run', { from, to }));
      }
    } catch (error) {
      fail(error, 'Following the pointer');
    } finally {
      inFlight = false;
    }
  }

  async function pick(ray: Ray): Promise<Probe | null> {
    const s = get();
    if (!s.project || !s.part) return null;
    return workers.live.call('pick', { ray, setup: setupsOf(s.project)[s.setup]!, head: s.project.head });
  }

  function hoverAt(probe: Probe | null): void {
    const { copper } = current(get());
    if (!probe) {
      set({ hover: null });
      return;
    }
    const triangle = copper ? copperAt(copper, probe.face, probe.point) : -1;
    set({ hover: { probe, triangle, element: triangle < 0 ? -1 : copper!.element[triangle]! } });
  }

  /** The middle of a pad within `reach` mm of the place and on the same side of its wall, or the place itself. */
  function snapped({ at: p, normal }: Probe, reach: number): [number, number, number] {
    const { copper } = current(get());
    let best: { at: [number, number, number]; far: number } | null = null;
    for (const e of get().project?.circuit.elements ?? []) {
      if (e.kind !== 'pad') continue;
      const far = Math.hypot(p[0] - e.at[0], p[1] - e.at[1], p[2] - e.at[2]) - padRadius(e.shape) * 0.7;
      if (far < reach && (!best || far < best.far) && !(copper && turnedAway(copper, e, normal)))
        best = { at: e.at, far };
    }
    return best?.at ?? p;
  }

  let line: Promise<unknown> = Promise.resolve();
  /** Clicks and keys of a tool take effect in the order they were made, though each click waits for its place. */
  function inTurn(f: () => unknown): Promise<void> {
    const mine = line.then(f).then(() => {});
    line = mine.catch(() => {});
    return mine;
  }

  /** A click with the tool in hand. */
  async function press(ray: Ray, snap: number, add: boolean): Promise<void> {
    let probe: Probe | null;
    try {
      probe = await pick(ray);
    } catch (error) {
      return fail(error, 'Finding the place');
    }
    const s = get();
    if (!s.project) return;
    if (s.tool.kind === 'look') {
      hoverAt(probe);
      const hit = get().hover;
      const element = hit && hit.element >= 0 ? s.copper?.value.elements[hit.element] : undefined;
      if (!element) return add ? undefined : select([]);
      // Copper of a drawing stands for the whole drawing first; a second click means the one element.
      const { drape } = element;
      const id =
        drape !== null && !s.selection.some((x) => x === drape || x.startsWith(`${drape}/`))
          ? drape
          : element.id;
      if (add)
        return select(s.selection.includes(id) ? s.selection.filter((x) => x !== id) : [...s.selection, id]);
      if (
        s.selection.length === 1 &&
        s.selection[0] === element.id &&
        element.kind === 'trace' &&
        element.path
      )
        return insertPoint(element.id, element.path, probe!.at);
      return select([id]);
    }
    if (!probe) return;
    if (s.tool.kind === 'pad') {
      const element: Element = {
        id: freeId(s.project, 'p'),
        kind: 'pad',
        net: s.pen.net,
        at: probe.at,
        shape: s.pen.shape,
        turn: 0,
      };
      act({ kind: 'add-element', element });
      return;
    }
    await extend(snapped(probe, snap));
  }

  async function extend(to: Vec3): Promise<void> {
    const { tool } = get();
    if (tool.kind !== 'trace') return;
    const last = tool.route[tool.route.length - 1];
    if (!last) return set({ tool: { ...tool, route: [to], live: null } });
    if (Math.hypot(last[0] - to[0], last[1] - to[1], last[2] - to[2]) < SAME_PLACE) return;
    const known = tool.live?.sure && tool.live.to === to ? tool.live : null;
    const run =
      known ??
      (await workers.live.call('run', { from: last, to }).catch((error: unknown) => {
        fail(error, 'Finding the way');
        return null;
      }));
    const now = get().tool;
    if (!run || now.kind !== 'trace' || now.route !== tool.route) return;
    if (!run.points)
      return notify(
        'problem',
        'There is no way over the surface to this place',
        'choose a place on the same piece of the part',
      );
    set({ tool: { ...now, route: [...now.route, to], runs: [...now.runs, run.points], live: null } });
  }

  /** Ends the trace being drawn; fewer than two places make none. */
  function finish(): void {
    const s = get();
    if (s.tool.kind !== 'trace' || !s.project) return;
    const { route } = s.tool;
    set({ tool: { kind: 'trace', route: [], runs: [], live: null } });
    if (route.length < 2) return;
    const element: Element = {
      id: freeId(s.project, 't'),
      kind: 'trace',
      net: s.pen.net || netAt(s.project, route[0]!) || netAt(s.project, route[route.length - 1]!),
      width: s.pen.width,
      route: route.map((at) => ({ at: [...at] as [number, number, number] })),
    };
    act({ kind: 'add-element', element });
  }

  function takeBack(): void {
    const { tool } = get();
    if (tool.kind !== 'trace') return;
    set({ tool: { ...tool, route: tool.route.slice(0, -1), runs: tool.runs.slice(0, -1), live: null } });
  }

  /** Escape: first drops the run in hand, then the tool, then the selection. */
  function drop(): void {
    const { tool, isolated } = get();
    if (tool.kind === 'trace' && tool.route.length > 0) setTool('trace');
    else if (tool.kind !== 'look') setTool('look');
    else if (isolated !== null) set({ isolated: null });
    else select([]);
  }

  function insertPoint(id: string, path: Float32Array, at: [number, number, number]): void {
    const e = get().project?.circuit.elements.find((x) => x.id === id);
    if (e?.kind !== 'trace') return;
    const nearest = (p: readonly number[]) => {
      let [best, index] = [Infinity, 0];
      for (let i = 0; i < path.length / 3; i++) {
        const d = Math.hypot(path[3 * i]! - p[0]!, path[3 * i + 1]! - p[1]!, path[3 * i + 2]! - p[2]!);
        if (d < best) [best, index] = [d, i];
      }
      return index;
    };
    const here = nearest(at);
    let index = e.route.findIndex((r, i) => i > 0 && nearest(r.at) >= here);
    if (index < 0) index = e.route.length - 1;
    act({ kind: 'add-point', id, index, at });
  }

  interface Drag {
    gesture: string;
    waiting: Ray | null;
    running: Promise<void> | null;
    /** The ways to the dragged point, from the points before and after it; where it was at first. */
    ways: { name: 'before' | 'after'; from: Vec3; was: Vec3 }[];
    id: string;
    index: number;
  }
  let dragging: Drag | null = null;

  /** Drags a point of an element to where the ray meets the part; `end` makes it one step. */
  function drag(id: string, index: number, ray: Ray, snap: number): void {
    dragging ??= {
      gesture: `drag ${++asked}`,
      waiting: null,
      running: null,
      ways: waysTo(id, index),
      id,
      index,
    };
    const mine = dragging;
    mine.waiting = ray;
    mine.running ??= (async () => {
      while (mine.waiting) {
        const next = mine.waiting;
        mine.waiting = null;
        const probe = await pick(next);
        const e = get().project?.circuit.elements.find((x) => x.id === id);
        if (!probe || !e) continue;
        if (e.kind === 'pad') act({ kind: 'move-pad', id, at: probe.at }, mine.gesture);
        else {
          const at = snapped(probe, snap);
          act({ kind: 'move-point', id, index, at }, mine.gesture);
          const runs = await Promise.all(
            mine.ways.map(({ name, from, was }) =>
              workers.live.call('pull', { from, to: at, hold: { hand: mine.gesture, name, was } }),
            ),
          );
          set({ preview: runs.flatMap((r) => (r.points ? [r.points] : [])) });
        }
      }
      mine.running = null;
    })().catch((error) => fail(error, 'Moving the point'));
  }

  function waysTo(id: string, index: number): Drag['ways'] {
    const e = get().project?.circuit.elements.find((x) => x.id === id);
    if (!e || e.kind === 'pad') return [];
    const points = (e.kind === 'trace' ? e.route : e.outline).map((p) => p.at);
    const was = points[index]!;
    const round = e.kind === 'region';
    const before = points[index - 1] ?? (round ? points[points.length - 1] : undefined);
    const after = points[index + 1] ?? (round ? points[0] : undefined);
    return [
      ...(before ? [{ name: 'before' as const, from: before, was }] : []),
      ...(after ? [{ name: 'after' as const, from: after, was }] : []),
    ];
  }

  /**
   * Lets go. Routes are shortest ways from point to point; where a dragged way is not the shortest any more, points are
   * added that hold it on its side, in the same step.
   */
  async function endDrag(): Promise<void> {
    const mine = dragging;
    dragging = null;
    await mine?.running;
    if (mine) await pinDown(mine).catch((error) => fail(error, 'Holding the way'));
    set((s) => ({ history: seal(s.history), preview: [] }));
    follower.wake();
  }

  async function pinDown({ gesture, ways, id, index }: Drag): Promise<void> {
    const [before, after] = await Promise.all(
      (['before', 'after'] as const).map(async (name) =>
        ways.some((w) => w.name === name) ? workers.live.call('pins', { hand: gesture, name }) : [],
      ),
    );
    // The later ones first, so that numbers of earlier points stay; those after run from the far point to this one.
    for (const at of after!) act({ kind: 'add-point', id, index: index + 1, at }, gesture);
    for (const at of [...before!].reverse()) act({ kind: 'add-point', id, index, at }, gesture);
    const added = before!.length + after!.length;
    if (added > 0)
      notify(
        'done',
        `${added === 1 ? 'A point was' : `${added} points were`} added to ${id}: the way stays on this side, where the shortest would change sides`,
      );
  }

  const carrier = createCarrier({
    get,
    act,
    pick,
    sketch: (asked) => workers.live.call('sketch', asked),
    preview: (loops) => set({ preview: loops }),
    release: follower.wake,
    fail,
  });

  /**
   * Lays drawings on the part. What came together goes together: one anchor, and one origin, the middle of all of them.
   * @param rays   the anchor is where the first of them that meets the part does
   * @param units  of drawings that name none; without it such a drawing is `no-units`
   * @returns `no-units` when the person is to be asked, else whether they were laid
   */
  async function layDrawings(
    files: readonly { file: string; ref: string | null; bytes: Uint8Array }[],
    rays: readonly Ray[],
    units?: Project['part']['units'],
  ): Promise<'laid' | 'not' | 'no-units'> {
    const start = get();
    if (!start.project || !start.part) {
      notify('problem', 'A drawing is laid on a part, and none is open', 'open a part first');
      return 'not';
    }
    const done = busy('Reading the drawing');
    let boxes: [Vec2, Vec2][];
    try {
      boxes = [];
      for (const { file, bytes } of files) {
        const how = { drawing: lastName(file), ...(units ? { units } : {}) };
        const { box } = await workers.live.call('lookAtDrawing', { bytes, how });
        if (box) boxes.push(box);
      }
    } catch (error) {
      if (units === undefined && problemsOf(error)?.some((p) => p.code === 'no-units')) return 'no-units';
      fail(error, 'Reading the drawing');
      return 'not';
    } finally {
      done.end();
    }
    if (boxes.length === 0) {
      notify(
        'problem',
        `${lastName(files[0]!.file)} holds nothing that becomes copper`,
        'give another drawing',
      );
      return 'not';
    }
    let anchor: [number, number, number] | null = null;
    for (const ray of rays) anchor ??= (await pick(ray))?.at ?? null;
    const s = get();
    if (!anchor || !s.project || s.part !== start.part) {
      notify('problem', 'There is no surface at this place', 'drop the drawing on the part');
      return 'not';
    }
    const middle = (k: 0 | 1) =>
      Math.round(
        500 * (Math.min(...boxes.map(([lo]) => lo[k])) + Math.max(...boxes.map(([, hi]) => hi[k]))),
      ) / 1000;
    const origin: [number, number] = [middle(0), middle(1)];
    const gesture = files.length > 1 ? `lay ${++asked}` : null;
    const ids: string[] = [];
    for (const { file, ref, bytes } of files) {
      const drawing = hold(file, ref, bytes);
      const id = freeId(get().project!, 'd');
      ids.push(id);
      const drape: Drape = {
        id,
        drawing,
        anchor,
        origin,
        turn: 0,
        mirror: false,
        evenLengths: true,
        drawingLayers: {},
        nets: {},
        ...(units ? { units } : {}),
      };
      act({ kind: 'add-drape', drape }, gesture);
    }
    set((x) => ({ history: seal(x.history), selection: ids, step: 'circuit' }));
    return 'laid';
  }

  /** Keeps a drawing under a name that no other bytes have. */
  function hold(file: string, ref: string | null, bytes: Uint8Array): string {
    const { drawings } = get();
    const name = lastName(file);
    const dot = name.lastIndexOf('.');
    const same = (held: HeldDrawing) =>
      held.bytes.length === bytes.length && held.bytes.every((b, i) => b === bytes[i]);
    for (let n = 1; ; n++) {
      const own = n === 1 ? name : `${name.slice(0, dot)}-${n}${name.slice(dot)}`;
      const held = drawings[own];
      if (held && !same(held)) continue;
      if (!held) set({ drawings: { ...drawings, [own]: { ref, bytes } } });
      return own;
    }
  }

  return {
    api,
    ...lookingActs(api),
    layDrawings,
    /** Moves a drawing's anchor to where the ray meets the part. */
    dragDrape: carrier.drag,
    endDrapeDrag: carrier.endDrag,
    turnDrape: carrier.turn,
    getState: get,
    subscribe: api.subscribe,
    act,
    seal: () => set((s) => ({ history: seal(s.history) })),
    undo() {
      const back = undo(get().history);
      if (!back) return;
      set({ history: back.history });
      become(back.project);
    },
    redo() {
      const forth = redo(get().history);
      if (!forth) return;
      set({ history: forth.history });
      become(forth.project);
    },
    notify,
    dismissNotice: (id: number) => set((s) => ({ notices: s.notices.filter((n) => n.id !== id) })),
    fail,
    select,
    deleteSelected() {
      const { selection } = get();
      if (selection.length > 0) act({ kind: 'delete', ids: selection });
    },
    setTool,
    setPen: (pen: Partial<State['pen']>) => set((s) => ({ pen: { ...s.pen, ...pen } })),
    setStep: (step: State['step']) => set({ step }),
    setSetup: (setup: number) => set({ setup, isolated: null }),
    setShow: (show: State['show']) => set({ show, ...(show === 'offset' ? {} : { isolated: null }) }),
    /** Moves the stage; the copper is then seen as it stands at that offset. */
    setOffset: (offset: number) => set({ offset, show: 'offset' }),
    /** Shows one layer alone, at its own offset; the same again shows all. */
    isolate(layer: number | null) {
      const s = get();
      const { plan } = current(s);
      if (layer === null || s.isolated === layer || !plan?.layers[layer])
        set({ isolated: null, show: 'layers' });
      else set({ isolated: layer, offset: -plan.layers[layer].focusHeight, show: 'layers' });
    },
    /** Puts a layer at a height chosen by hand; the project keeps all heights of the setup from then on. */
    moveLayer(layer: number, height: number, gesture: string | null) {
      const s = get();
      if (!s.project || s.project.setups === 'auto') return;
      // Once moved by hand, heights are the document's own: no move waits for the plan, and none is lost.
      const now =
        s.project.setups[s.setup]?.focusHeights ?? current(s).plan?.layers.map((l) => l.focusHeight);
      if (!now) return;
      const heights = [...now].sort((a, b) => a - b);
      const old = heights[layer];
      if (old === undefined) return;
      // Layers are numbered from below: one does not pass its neighbour, and so keeps its number.
      const least = Math.max(s.project.stage.step, 0.01);
      const [below, above] = [heights[layer - 1] ?? -Infinity, heights[layer + 1] ?? Infinity];
      heights[layer] = Math.round(Math.max(below + least, Math.min(above - least, height)) * 1e4) / 1e4;
      act(
        {
          kind: 'set',
          path: ['setups', s.setup, 'focusHeights'],
          what: `height of layer ${layer + 1}`,
          value: heights,
        },
        gesture,
      );
    },
    /** Lets the planner choose the heights again. */
    fewest() {
      const s = get();
      act({
        kind: 'set',
        path: ['setups', s.setup, 'focusHeights'],
        what: 'layers to the fewest',
        value: undefined,
      });
    },
    point,
    press: (ray: Ray, snap: number, add: boolean) => inTurn(() => press(ray, snap, add)),
    finish: () => inTurn(finish),
    takeBack: () => inTurn(takeBack),
    drop: () => inTurn(drop),
    drag,
    endDrag,
    /**
     * Opens a project text. The part's bytes may be missing: then the project is shown without it. So may a drawing's:
     * then the rest of the copper is shown.
     */
    async openProject(
      text: string,
      name: string,
      ref: string | null,
      part: { ref: string | null; bytes: Uint8Array } | null,
      drawings: readonly OpenedDrawing[] = [],
      saved = true,
    ): Promise<boolean> {
      try {
        const { project, unknown } = await workers.heavy.call('readProject', { text, file: name });
        const origin: Origin = {
          ref,
          name,
          text: saved ? text : null,
          saved: saved ? project : null,
          partRef: part?.ref ?? null,
          partBytes: null,
        };
        const held = drawings.flatMap(({ file, ref: at, bytes }): [string, HeldDrawing][] =>
          bytes ? [[file, { ref: at, bytes }]] : [],
        );
        const shown = await show(project, origin, part?.bytes ?? null, Object.fromEntries(held));
        if (shown)
          for (const d of drawings.filter((x) => x.bytes === null).slice(0, 3))
            notify(
              'problem',
              `${name}: the ${d.file === project.netlist ? 'netlist' : 'drawing'} ${d.file} is missing: ${(d.problem ?? 'its file was not found').replace(/\.$/, '')}`,
              'put the file back and open the project again',
            );
        if (shown && unknown.length > 0)
          notify(
            'done',
            `Fields that this program does not know are kept: ${unknown.slice(0, 5).join(', ')}`,
          );
        return shown;
      } catch (error) {
        fail(error, 'Opening');
        return false;
      }
    },
    /** A new project on a part. */
    async openPart(
      name: string,
      part: { file: string; ref: string | null; bytes: Uint8Array },
    ): Promise<boolean> {
      const empty = newProject(part.file, null);
      const origin: Origin = {
        ref: null,
        name: `${empty.name}.drape.json`,
        text: null,
        saved: null,
        partRef: part.ref,
        partBytes: null,
      };
      const mine = opening + 1;
      if (!(await show(empty, { ...origin, name: origin.name || name }, part.bytes))) return false;
      const bounds = get().part?.bounds;
      if (mine === opening && bounds) {
        const placed = newProject(part.file, bounds);
        set((s) => ({ project: placed, revision: s.revision + 1 }));
        follower.wake();
      }
      return true;
    },
    /** After a save: the document as it stands is the saved one. */
    saved(origin: Partial<Origin>, project: Project, text: string) {
      set((s) => ({ origin: { ...s.origin, ...origin, text, saved: project } }));
    },
    /** The part's name in the project follows its place; that is no act of the person. */
    renamePart(file: string): Project | null {
      const s = get();
      if (!s.project || s.project.part.file === file) return s.project;
      const project = { ...s.project, part: { ...s.project.part, file } };
      set({ project, revision: s.revision + 1 });
      follower.wake();
      return project;
    },
    /** Drawings that the document uses, in the order of its drapes, and its netlist. */
    drawingsInUse(): { file: string; ref: string | null; bytes: Uint8Array }[] {
      const { project, drawings } = get();
      const names = new Set(project?.circuit.drapes.map((d) => d.drawing));
      if (project?.netlist !== undefined) names.add(project.netlist);
      return [...names].flatMap((file) => {
        const held = drawings[file];
        return held ? [{ file, ...held }] : [];
      });
    },
    /**
     * Names of drawings follow their places, as the part's does. The names before stay known: undo may bring them back.
     * @param placed  for each name in use where it lies and how it is named from there
     */
    placeDrawings(placed: readonly { was: string; file: string; ref: string }[]): Project | null {
      const s = get();
      if (!s.project || placed.length === 0) return s.project;
      const names = new Map(placed.map((p) => [p.was, p.file]));
      const drawings = { ...s.drawings };
      for (const { was, file, ref } of placed) {
        const held = s.drawings[was];
        if (held) drawings[was] = drawings[file] = { ...held, ref };
      }
      const drapes = s.project.circuit.drapes.map((d) => {
        const drawing = names.get(d.drawing) ?? d.drawing;
        return drawing === d.drawing ? d : { ...d, drawing };
      });
      const { netlist } = s.project;
      const list = netlist === undefined ? undefined : (names.get(netlist) ?? netlist);
      const same = list === netlist && drapes.every((d, i) => d === s.project!.circuit.drapes[i]);
      const moved = { ...s.project, circuit: { ...s.project.circuit, drapes } };
      const project = same ? s.project : list === undefined ? moved : { ...moved, netlist: list };
      set({ project, drawings, revision: same ? s.revision : s.revision + 1 });
      if (!same) follower.wake();
      return project;
    },
    unsaved: () => isUnsaved(get()),
    setExported: (exported: State['exported']) => set({ exported }),
    async exportFiles(projectText: string) {
      const s = get();
      if (!s.project || !s.origin.partBytes) return null;
      await follower.settled();
      const done = busy('Making the scan files');
      try {
        await workers.heavy.call('holdDrawings', { files: filesOf(s.drawings) });
        return await workers.heavy.call(
          'exportFiles',
          {
            projectFile: s.origin.name,
            projectText,
            part: { file: s.project.part.file, bytes: s.origin.partBytes },
          },
          done.hear,
        );
      } finally {
        done.end();
      }
    },
    /** Stops whatever long work runs. */
    stop: () => workers.heavy.stopAll(),
    again: follower.again,
    settled: follower.settled,
  };
}

/** A drawing that an opened project names; null bytes where its file could not be read. */
export interface OpenedDrawing {
  file: string;
  ref: string | null;
  bytes: Uint8Array | null;
  problem?: string;
}

/** A pointer that has not moved for this long rests, ms; how often that is looked at. */
const REST = 240;
const FRAME = 16;
const pause = (ms: number): Promise<void> => new Promise((done) => setTimeout(done, ms));

/** Two clicks closer than this are one, mm: well under the narrowest trace. */
const SAME_PLACE = 0.02;

export const setupsOf = (project: Project): Setup[] =>
  project.setups === 'auto'
    ? [{ name: 'auto', pose: { rotate: [0, 0, 0, 1], move: [0, 0, 0] } }]
    : project.setups;

export function padRadius(shape: State['pen']['shape']): number {
  if ('circle' in shape) return shape.circle / 2;
  if ('rect' in shape) return Math.hypot(...shape.rect) / 2;
  if ('slot' in shape) return Math.max(...shape.slot) / 2;
  return Math.max(...shape.outline.map(([u, v]) => Math.hypot(u, v)));
}

/** Whether the copper in the middle of a pad looks away from a direction; false while it is not laid. */
function turnedAway(copper: CopperPicture, pad: { id: string; at: Vec3 }, normal: Vec3): boolean {
  const laid = copper.elements.find((e) => e.id === pad.id);
  if (!laid) return false;
  const { positions: x, normals: n, corners } = copper;
  let [nearest, cosine] = [Infinity, 1];
  for (const v of corners.subarray(3 * laid.first, 3 * (laid.first + laid.count))) {
    const [i, j, k] = [3 * v, 3 * v + 1, 3 * v + 2];
    const far = Math.hypot(x[i]! - pad.at[0], x[j]! - pad.at[1], x[k]! - pad.at[2]);
    if (far >= nearest) continue;
    nearest = far;
    cosine = n[i]! * normal[0] + n[j]! * normal[1] + n[k]! * normal[2];
  }
  return cosine < 0;
}

/** Net of the pad that stands at this place: a trace that begins on a pad belongs to it. */
function netAt(project: Project, p: Vec3): string {
  for (const e of project.circuit.elements)
    if (e.kind === 'pad' && Math.hypot(e.at[0] - p[0], e.at[1] - p[1], e.at[2] - p[2]) < 0.01) return e.net;
  return '';
}

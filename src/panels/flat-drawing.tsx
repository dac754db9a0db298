/** The flat drawing beside the part: as it was drawn, true in shape, with the same things selected in both. */
import { memo, useCallback, useEffect, useMemo, useRef, useState } from 'react';
import type { Vec2 } from '../core/base/vec.ts';
import type { Drape, Limits } from '../core/project/schema.ts';
import { lastName } from '../store/document.ts';
import {
  boxAround,
  drapeInHand,
  type FlatRow,
  flatRows,
  pointedAt,
  shapeAt,
  shapeBoxes,
  toggled,
} from '../store/flat.ts';
import { figuresOf, holesPath } from '../store/flat-paths.ts';
import { current } from '../store/state.ts';
import { show } from '../store/units.ts';
import type { CopperPicture, DrawingPicture } from '../worker/pictures.ts';
import { FigureLayer, FlatPatterns } from './flat-figures.tsx';
import { FlatList } from './flat-list.tsx';
import { StretchSwatch } from './swatch.tsx';
import { useLook, useSteady, useWindow } from './window.tsx';

export function FlatDrawing() {
  const state = useSteady();
  const { project, flatShown } = state;
  const { copper } = current(state);
  const [last, setLast] = useState('');
  const inHand = drapeInHand(state);
  useEffect(() => {
    if (inHand) setLast(inHand.id);
  }, [inHand]);
  const drapes = project?.circuit.drapes ?? [];
  if (!flatShown || !project || drapes.length === 0) return null;
  const drape = inHand ?? drapes.find((d) => d.id === last) ?? drapes[0]!;
  const read = copper?.drawings.find((r) => r.drape === drape.id);
  return (
    <section className="flat" aria-label="Flat drawing">
      <Head drape={drape} drapes={drapes} onChoose={setLast} />
      {copper && read?.flat.box ? (
        <Sheet
          key={drape.id}
          drape={drape}
          read={read}
          copper={copper}
          limits={project.limits}
          stretchShown={state.stretchShown}
          selection={state.selection}
        />
      ) : (
        <p className="dim flat-none">
          {read ? 'There is nothing in it.' : copper ? 'It could not be read.' : 'Being read …'}
        </p>
      )}
    </section>
  );
}

function Head({
  drape,
  drapes,
  onChoose,
}: {
  drape: Drape;
  drapes: readonly Drape[];
  onChoose(id: string): void;
}) {
  const { store } = useWindow();
  return (
    <div className="flat-head">
      <h2>Flat drawing</h2>
      {drapes.length > 1 ? (
        <select
          aria-label="Drawing shown"
          value={drape.id}
          onChange={(e) => {
            onChoose(e.target.value);
            store.select([e.target.value]);
          }}
        >
          {drapes.map((d) => (
            <option key={d.id} value={d.id}>
              {d.id} {lastName(d.drawing)}
            </option>
          ))}
        </select>
      ) : (
        <span className="dim">
          {drape.id} {lastName(drape.drawing)}
        </span>
      )}
      <button type="button" aria-label="Put the flat drawing away" onClick={() => store.showFlat(false)}>
        ×
      </button>
    </div>
  );
}

/** What the sheet shows: middle of the picture in the drawing, and pixels in a millimetre. */
interface Look {
  middle: Vec2;
  scale: number;
}

interface SheetProps {
  drape: Drape;
  read: DrawingPicture;
  copper: CopperPicture;
  limits: Limits;
  stretchShown: boolean;
  selection: readonly string[];
}

/** How near to a shape counts as on it, px; travel that is still a click. */
const NEAR = 4;
const STILL = 4;

function Sheet({ drape, read, copper, limits, stretchShown, selection }: SheetProps) {
  const { store, reveal } = useWindow();
  const { flat } = read;
  const svg = useRef<SVGSVGElement>(null);
  const [size, setSize] = useState<Vec2>([300, 200]);
  /** Null while all of it is shown. */
  const [chosen, setLook] = useState<Look | null>(null);
  // biome-ignore lint/correctness/useExhaustiveDependencies: the key tells whether the flat shapes differ
  const boxes = useMemo(() => shapeBoxes(flat), [flat.key]);
  // biome-ignore lint/correctness/useExhaustiveDependencies: likewise
  const rows = useMemo(
    () => flatRows(read, copper, limits, stretchShown),
    [flat.key, copper, limits, stretchShown],
  );
  const all = useMemo(() => flat.shapes.map((_, i) => i), [flat]);
  const marked = useMemo(() => {
    const ids = new Set(selection);
    return all.filter((i) => {
      const id = flat.ids[i]!;
      return id !== null && (ids.has(id) || ids.has(drape.id));
    });
  }, [all, flat.ids, selection, drape.id]);
  const around: [Vec2, Vec2] = useMemo(() => {
    // The anchor may lie outside of all that is drawn.
    const [lo, hi] = flat.box!;
    const [u, v] = drape.origin;
    return [
      [Math.min(lo[0], u), Math.min(lo[1], v)],
      [Math.max(hi[0], u), Math.max(hi[1], v)],
    ];
  }, [flat.box, drape.origin]);
  const look = chosen ?? fitted(around, size);

  useEffect(() => {
    const node = svg.current!;
    const seen = new ResizeObserver(() => {
      if (node.clientWidth > 1) setSize([node.clientWidth, node.clientHeight]);
    });
    seen.observe(node);
    return () => seen.disconnect();
  }, []);

  // What is selected comes into view.
  const now = useRef({ look, size });
  now.current = { look, size };
  useEffect(() => {
    const box = boxAround(boxes, marked);
    if (box && !holds(now.current.look, now.current.size, box))
      setLook((was) => (was === null ? null : shifted(now.current.look, now.current.size, box)));
  }, [boxes, marked]);

  const zoom = useCallback((by: number, at: Vec2 | null) => {
    const { look: l, size: s } = now.current;
    setLook(zoomed(l, s, by, at ?? [s[0] / 2, s[1] / 2]));
  }, []);
  useEffect(() => {
    const node = svg.current!;
    const onWheel = (e: WheelEvent) => {
      e.preventDefault();
      const lines = e.deltaMode === 1 ? e.deltaY * 16 : e.deltaY;
      const box = node.getBoundingClientRect();
      zoom(Math.exp(-Math.max(-60, Math.min(60, lines)) * 0.0035), [
        e.clientX - box.left,
        e.clientY - box.top,
      ]);
    };
    node.addEventListener('wheel', onWheel, { passive: false });
    return () => node.removeEventListener('wheel', onWheel);
  }, [zoom]);
  useEffect(() => () => store.pointAt(null), [store]);

  const under = (e: { clientX: number; clientY: number }): string | null => {
    const box = svg.current!.getBoundingClientRect();
    const at = placeOf(look, size, [e.clientX - box.left, e.clientY - box.top]);
    const i = shapeAt(flat, boxes, at, NEAR / look.scale, (s) => flat.ids[s] !== null);
    return i < 0 ? null : flat.ids[i]!;
  };
  const take = (id: string | null, more: boolean) => {
    if (id === null) return more ? undefined : store.select([]);
    const list = store.getState().selection;
    // The whole drawing gives way to what is chosen in it.
    const own = more
      ? toggled(
          list.filter((x) => x !== drape.id),
          id,
        )
      : [id];
    store.select(own);
    reveal([id]);
  };

  const grip = useRef<{ x: number; y: number; moved: boolean } | null>(null);
  const { middle, scale } = look;
  return (
    <>
      <div className="flat-sheet">
        <svg
          ref={svg}
          role="img"
          aria-label={`Flat drawing ${drape.id}: ${flat.shapes.length} shapes, ${flat.holes.length / 5} holes`}
          data-testid="flat"
          data-scale={scale.toFixed(4)}
          onPointerDown={(e) => {
            if (e.button !== 0) return;
            grip.current = { x: e.clientX, y: e.clientY, moved: false };
            e.currentTarget.setPointerCapture(e.pointerId);
          }}
          onPointerMove={(e) => {
            const g = grip.current;
            if (!g) return store.pointAt(under(e));
            if (!g.moved && Math.hypot(e.clientX - g.x, e.clientY - g.y) < STILL) return;
            setLook({
              scale,
              middle: [middle[0] - (e.clientX - g.x) / scale, middle[1] + (e.clientY - g.y) / scale],
            });
            grip.current = { x: e.clientX, y: e.clientY, moved: true };
          }}
          onPointerUp={(e) => {
            const g = grip.current;
            grip.current = null;
            if (g && !g.moved) take(under(e), e.shiftKey || e.ctrlKey || e.metaKey);
          }}
          onPointerCancel={() => {
            grip.current = null;
          }}
          onPointerLeave={() => store.pointAt(null)}
        >
          <FlatPatterns scale={scale} />
          <g
            transform={`translate(${size[0] / 2 - middle[0] * scale} ${size[1] / 2 + middle[1] * scale}) scale(${scale} ${-scale})`}
          >
            <Shapes read={read} rows={rows} shapes={all} scale={scale} rim="flat-rim" grow={1.6} />
            <Shapes read={read} rows={rows} shapes={marked} scale={scale} rim="flat-chosen" grow={5} />
            <Pointed read={read} rows={rows} scale={scale} />
            <Holes holes={flat.holes} flatKey={flat.key} />
          </g>
          <Anchor at={toScreen(look, size, drape.origin)} />
          <ScaleBar scale={scale} height={size[1]} />
        </svg>
        <fieldset className="flat-zoom">
          <legend className="sr">Zoom of the flat drawing</legend>
          <button type="button" aria-label="Closer" onClick={() => zoom(1.4, null)}>
            +
          </button>
          <button type="button" aria-label="Farther" onClick={() => zoom(1 / 1.4, null)}>
            −
          </button>
          <button type="button" aria-label="All of the flat drawing" onClick={() => setLook(null)}>
            All
          </button>
        </fieldset>
      </div>
      <Foot rows={rows} limits={limits} stretchShown={stretchShown} holes={flat.holes.length / 5} />
      <FlatList read={read} rows={rows} selection={selection} drape={drape.id} onReveal={reveal} />
    </>
  );
}

/** Some shapes with a rim or a halo around them. */
const Shapes = memo(function Shapes({
  read,
  rows,
  shapes,
  scale,
  rim,
  grow,
}: {
  read: DrawingPicture;
  rows: readonly FlatRow[];
  shapes: readonly number[];
  scale: number;
  rim: string;
  grow: number;
}) {
  // biome-ignore lint/correctness/useExhaustiveDependencies: the key tells whether the flat shapes differ
  const figures = useMemo(() => figuresOf(read.flat, rows, shapes), [read.flat.key, rows, shapes]);
  const dashed = figures.filter((f) => f.look === 'left-out');
  const drawn = figures.filter((f) => f.look !== 'left-out');
  return (
    <>
      <FigureLayer figures={drawn} scale={scale} grow={grow} className={rim} />
      <FigureLayer figures={drawn} scale={scale} />
      {dashed.map((f) => (
        <path key={f.key} className="flat-out" data-flat="left-out" d={f.d} />
      ))}
    </>
  );
});

/** What the pointer is over, here or on the part: the only thing that is drawn anew while it moves. */
function Pointed({ read, rows, scale }: { read: DrawingPicture; rows: readonly FlatRow[]; scale: number }) {
  const id = useLook(pointedAt);
  const shapes = useMemo(() => {
    const i = id === null ? -1 : read.flat.ids.indexOf(id);
    return i < 0 ? [] : [i];
  }, [id, read]);
  return <Shapes read={read} rows={rows} shapes={shapes} scale={scale} rim="flat-pointed" grow={5} />;
}

const Holes = memo(
  function Holes({ holes }: { holes: Float32Array; flatKey: string }) {
    return <path className="flat-hole" d={holesPath(holes)} />;
  },
  (a, b) => a.flatKey === b.flatKey,
);

/** Where the drawing's origin is, which lands on the anchor, with the ways of u and v. */
function Anchor({ at: [x, y] }: { at: Vec2 }) {
  const mark = 'M-6 0 H26 M0 6 V-26 M22 -4 L27 0 L22 4 M-4 -22 L0 -27 L4 -22';
  return (
    <g className="flat-anchor" transform={`translate(${x} ${y})`} data-testid="flat-anchor">
      <path className="under" d={mark} />
      <circle className="under" r="5" />
      <path d={mark} />
      <circle r="5" />
      <text x="31" y="4">
        u
      </text>
      <text x="-3" y="-31">
        v
      </text>
    </g>
  );
}

function ScaleBar({ scale, height }: { scale: number; height: number }) {
  const mm = roundLength(70 / scale);
  const long = mm * scale;
  return (
    <g className="flat-scale" transform={`translate(12 ${height - 12})`} data-testid="flat-scale">
      <path className="under" d={`M0 -5 V0 H${long} V-5`} />
      <path d={`M0 -5 V0 H${long} V-5`} />
      <text x={long + 6} y="1">
        {mm < 0.001 ? `${show(1e6 * mm, 0)} nm` : mm < 0.1 ? `${show(1000 * mm, 0)} µm` : `${show(mm, 1)} mm`}
      </text>
    </g>
  );
}

/** The largest of 1, 2, 5, 10 … that is not longer. */
function roundLength(most: number): number {
  const ten = 10 ** Math.floor(Math.log10(most));
  return ten * ([5, 2].find((n) => n * ten <= most) ?? 1);
}

const WORDS = { 'not-laid': 'Not laid, or not all of it', 'left-out': 'In a layer left out' } as const;

/** What the marks say, and what to do with the pointer. */
function Foot({
  rows,
  limits,
  stretchShown,
  holes,
}: {
  rows: readonly FlatRow[];
  limits: Limits;
  stretchShown: boolean;
  holes: number;
}) {
  const count = (look: FlatRow['look']) => rows.filter((r) => r.look === look).length;
  const marks = [
    ...(['not-laid', 'left-out'] as const).map((look) => ({ look, words: WORDS[look], n: count(look) })),
    ...(stretchShown
      ? []
      : [
          {
            look: 'too-much' as const,
            words: `Lengths off by more than ${show(100 * limits.maxStretch, 1)} %`,
            n: count('too-much'),
          },
        ]),
  ].filter((m) => m.n > 0);
  return (
    <div className="flat-foot">
      {marks.length > 0 && (
        <ul aria-label="What the marks of the flat drawing say">
          {marks.map((m) => (
            <li key={m.look} data-mark={m.look}>
              <StretchSwatch look={m.look} />
              <span>{m.words}</span>
              <span className="count">{m.n}</span>
            </li>
          ))}
        </ul>
      )}
      {holes > 0 && <p className="dim">{holes === 1 ? 'One hole' : `${holes} holes`}, drawn as rings.</p>}
      <PointedWords rows={rows} />
    </div>
  );
}

function PointedWords({ rows }: { rows: readonly FlatRow[] }) {
  const id = useLook(pointedAt);
  const e = id === null ? null : rows.find((r) => r.laid?.id === id)?.laid;
  return (
    <p className="dim flat-words">
      {e
        ? `${e.id}, ${e.net ? `net ${e.net}` : 'no net'}, ${e.kind === 'trace' ? `${show(e.length, 2)} mm` : `${show(e.area, 2)} mm²`}`
        : 'Click selects here and on the part. Drag moves, the wheel zooms.'}
    </p>
  );
}

// --- where things are ------------------------------------------------------------------------------

/** Room around a drawing that is shown whole, px: its rims, and the names of the axes. */
const ROOM = 34;

function fitted([lo, hi]: readonly [Vec2, Vec2], [w, h]: Vec2): Look {
  const scale = Math.min(
    Math.max(20, w - 2 * ROOM) / Math.max(hi[0] - lo[0], 1e-6),
    Math.max(20, h - 2 * ROOM) / Math.max(hi[1] - lo[1], 1e-6),
  );
  return { middle: [(lo[0] + hi[0]) / 2, (lo[1] + hi[1]) / 2], scale };
}

const toScreen = ({ middle, scale }: Look, [w, h]: Vec2, [u, v]: readonly [number, number]): Vec2 => [
  w / 2 + (u - middle[0]) * scale,
  h / 2 - (v - middle[1]) * scale,
];

const placeOf = ({ middle, scale }: Look, [w, h]: Vec2, [x, y]: Vec2): Vec2 => [
  middle[0] + (x - w / 2) / scale,
  middle[1] - (y - h / 2) / scale,
];

function zoomed(look: Look, size: Vec2, by: number, at: Vec2): Look {
  const scale = Math.max(0.02, Math.min(5000, look.scale * by));
  const [u, v] = placeOf(look, size, at);
  const [x, y] = [(at[0] - size[0] / 2) / scale, (at[1] - size[1] / 2) / scale];
  return { scale, middle: [u - x, v + y] };
}

/** Whether all of a box can be seen. */
function holds(look: Look, size: Vec2, [lo, hi]: readonly [Vec2, Vec2]): boolean {
  const [a, b] = [toScreen(look, size, lo), toScreen(look, size, hi)];
  return a[0] >= 0 && b[0] <= size[0] && b[1] >= 0 && a[1] <= size[1];
}

/** Moved so that a box is seen, and no closer than it takes to see all of it. */
function shifted(look: Look, size: Vec2, box: readonly [Vec2, Vec2]): Look {
  const whole = fitted(box, size);
  return { middle: whole.middle, scale: Math.min(look.scale, whole.scale) };
}

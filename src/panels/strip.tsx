/** The height strip: how much copper lies at each bench height, which layer takes it, and where the focus stands now. */
import { type KeyboardEvent, type PointerEvent, useEffect, useMemo, useRef, useState } from 'react';
import type { Project } from '../core/project/schema.ts';
import { plainDepth } from '../store/looks.ts';
import { heightProfile, niceStep } from '../store/profile.ts';
import { current } from '../store/state.ts';
import { setupsOf } from '../store/store.ts';
import { show, signed } from '../store/units.ts';
import { overview } from '../store/words.ts';
import { NumberField } from './fields.tsx';
import { useLook, useSteady, useWindow } from './window.tsx';

const HIGH = 96;
const TOP = 22;
const FOOT = 18;

export function HeightStrip() {
  const project = useLook((s) => s.project);
  return project ? <Strip project={project} /> : <section className="strip" aria-label="Height strip" />;
}

function Strip({ project }: { project: Project }) {
  const { store } = useWindow();
  const state = useSteady();
  const { offset, isolated } = state;
  const grip = useRef<{ band: number; x: number; from: number; scale: number; moved: boolean } | null>(null);
  const { copper, reach, plan } = current(state);
  const profile = useMemo(() => (copper ? heightProfile(copper, state.setup) : null), [copper, state.setup]);
  const box = useRef<HTMLDivElement>(null);
  const [wide, setWide] = useState(600);
  useEffect(() => {
    if (!box.current) return;
    const watch = new ResizeObserver(([e]) => setWide(Math.max(200, e!.contentRect.width)));
    watch.observe(box.current);
    return () => watch.disconnect();
  }, []);

  const depth = plainDepth(project.limits, reach);
  const layers = plan?.layers ?? [];
  const handMade = setupsOf(project)[state.setup]?.focusHeights;
  // By hand, a height that writes nothing is still there to be dragged back.
  const bands = handMade
    ? [...handMade]
        .sort((a, b) => a - b)
        .map((height) => ({ height, layer: layers.findIndex((l) => l.focusHeight === height) }))
    : layers.map((l, layer) => ({ height: l.focusHeight, layer }));
  const [low, high] = profile?.range ?? [-5, 5];
  const margin = Math.max(depth, (high - low) * 0.08) + 0.6;
  const from = Math.min(low, ...bands.map((b) => b.height)) - margin;
  const to = Math.max(high, ...bands.map((b) => b.height)) + margin;
  const x = (z: number) => ((z - from) / (to - from)) * wide;
  const z = (px: number) => from + (px / wide) * (to - from);
  const most = profile ? Math.max(...profile.area, 1e-9) : 1;
  const [stageLow, stageHigh] = project.stage.range;
  const step = project.stage.step || 0.01;
  const toStage = (s: number) => Math.max(stageLow, Math.min(stageHigh, Math.round(s / step) * step));
  const moves = project.stage.zMoves;
  const shownZ = moves === 'head' ? -offset : offset;
  const focus = -offset;

  // --- the marker ---
  function dragMarker(e: PointerEvent<SVGGElement>) {
    const target = e.currentTarget;
    if (e.type === 'pointerdown') target.setPointerCapture(e.pointerId);
    else if (!target.hasPointerCapture(e.pointerId)) return;
    const left = target.ownerSVGElement!.getBoundingClientRect().left;
    store.setOffset(toStage(-z(e.clientX - left)));
  }
  function keyMarker(e: KeyboardEvent) {
    const by = { ArrowLeft: -1, ArrowDown: -1, ArrowRight: 1, ArrowUp: 1, PageDown: -10, PageUp: 10 }[e.key];
    if (by === undefined) return;
    e.preventDefault();
    // To the right is a higher focus, so a lower stage.
    store.setOffset(toStage(offset - by * Math.max(step, e.shiftKey ? 1 : 0.1)));
  }

  // --- the bands ---
  function downBand(e: PointerEvent<SVGGElement>, band: number) {
    e.currentTarget.setPointerCapture(e.pointerId);
    grip.current = { band, x: e.clientX, from: bands[band]!.height, scale: (to - from) / wide, moved: false };
  }
  function moveBand(e: PointerEvent<SVGGElement>) {
    const g = grip.current;
    if (!g || (!g.moved && Math.abs(e.clientX - g.x) < 4)) return;
    g.moved = true;
    store.moveLayer(g.band, -toStage(-(g.from + (e.clientX - g.x) * g.scale)), 'band');
  }
  function upBand() {
    const g = grip.current;
    grip.current = null;
    if (!g) return;
    if (g.moved) store.seal();
    else store.isolate(bands[g.band]?.layer ?? null);
  }
  function keyBand(e: KeyboardEvent, band: number) {
    if (e.key === 'Enter' || e.key === ' ') store.isolate(bands[band]!.layer);
    else {
      const by = { ArrowLeft: -1, ArrowRight: 1 }[e.key];
      if (by === undefined) return;
      store.moveLayer(
        band,
        -toStage(-(bands[band]!.height + by * Math.max(step, e.shiftKey ? 1 : 0.1))),
        null,
      );
    }
    e.preventDefault();
    e.stopPropagation();
  }

  const tick = niceStep((to - from) / (wide / 70));
  const ticks: number[] = [];
  for (let t = Math.ceil(from / tick) * tick; t <= to; t += tick) ticks.push(t);
  const atOffset = state.show === 'offset';
  const byHand = handMade !== undefined;
  const markerX = Math.max(1, Math.min(wide - 1, x(focus)));
  const tag = `${signed(shownZ)} mm`;
  const lost = copper && plan ? overview(copper, state.setup, reach, plan).lost : 0;

  return (
    <section className="strip" aria-label="Height strip">
      <div className="strip-head">
        <NumberField
          label={moves === 'head' ? 'Head offset' : 'Stage offset'}
          value={shownZ}
          unit="mm"
          quantity="length"
          digits={3}
          min={stageLow}
          max={stageHigh}
          compact
          onValue={(v) => store.setOffset(moves === 'head' ? -v : v)}
        />
        <span className="dim">
          {moves === 'head' ? 'the head moves, + lifts the head' : 'the stage moves, + lifts the part'}; bench
          height {signed(focus)} mm is in focus
        </span>
        <span className="push" />
        <fieldset className="segments">
          <legend className="sr">Show the copper</legend>
          <button type="button" aria-pressed={!atOffset} onClick={() => store.setShow('layers')}>
            As planned
          </button>
          <button type="button" aria-pressed={atOffset} onClick={() => store.setShow('offset')}>
            At this offset
          </button>
        </fieldset>
        {isolated !== null && (
          <button type="button" onClick={() => store.isolate(null)}>
            All layers
          </button>
        )}
        <button
          type="button"
          disabled={!byHand}
          onClick={() => store.fewest()}
          title="Put the plan with the fewest layers back"
        >
          Fewest
        </button>
      </div>
      <div className="strip-plot" ref={box}>
        {/* biome-ignore lint/a11y/useSemanticElements: a fieldset cannot hold a drawing's parts */}
        <svg
          width={wide}
          height={TOP + HIGH + FOOT}
          role="group"
          aria-label="Copper by bench height"
          data-from={from}
          data-to={to}
        >
          <defs>
            <pattern
              id="slashes"
              width="7"
              height="7"
              patternUnits="userSpaceOnUse"
              patternTransform="rotate(35)"
            >
              <rect className="focus-base" width="7" height="7" />
              <rect className="focus-mark" width="2.6" height="7" />
            </pattern>
          </defs>
          <line className="axis" x1="0" x2={wide} y1={TOP + HIGH + 0.5} y2={TOP + HIGH + 0.5} />
          {ticks.map((t) => (
            <g key={t} className="tick">
              <line x1={x(t)} x2={x(t)} y1={TOP + HIGH} y2={TOP + HIGH + 4} />
              <text x={x(t)} y={TOP + HIGH + 15} textAnchor="middle">
                {show(t, tick < 1 ? 2 : 0)}
              </text>
            </g>
          ))}
          {profile &&
            [...profile.area].map((a, i) => {
              const zMid = profile.from + (i + 0.5) * profile.bin;
              const tall = (a / most) * (HIGH - 6);
              const out = atOffset
                ? Math.abs(zMid + offset) > depth
                : layers.length > 0 &&
                  !layers.some((l) => Math.abs(zMid - l.focusHeight) <= depth + profile.bin / 2);
              return a > 0 ? (
                <rect
                  key={zMid}
                  className={out ? 'bar out' : 'bar'}
                  fill={out ? 'url(#slashes)' : undefined}
                  x={x(profile.from + i * profile.bin)}
                  width={Math.max(1, x(profile.from + profile.bin) - x(profile.from) + 0.3)}
                  y={TOP + HIGH - tall}
                  height={tall}
                />
              ) : null;
            })}
          {bands.map((b, i) => (
            <g
              // biome-ignore lint/suspicious/noArrayIndexKey: bands are known by their order, from below
              key={i}
              className={`band${isolated !== null && isolated === b.layer ? ' alone' : ''}${i % 2 ? ' odd' : ''}${b.layer < 0 ? ' idle' : ''}`}
              tabIndex={0}
              role="slider"
              data-testid={`band-${i + 1}`}
              aria-label={
                b.layer < 0
                  ? 'Height that writes nothing'
                  : `Layer ${layers[b.layer]!.index}, focus height; Enter shows it alone`
              }
              aria-valuenow={Number(b.height.toFixed(3))}
              aria-valuemin={Number(from.toFixed(2))}
              aria-valuemax={Number(to.toFixed(2))}
              aria-valuetext={`${signed(b.height)} mm${isolated !== null && isolated === b.layer ? ', shown alone' : ''}`}
              onPointerDown={(e) => downBand(e, i)}
              onPointerMove={moveBand}
              onPointerUp={upBand}
              onPointerCancel={upBand}
              onKeyDown={(e) => keyBand(e, i)}
            >
              <rect
                x={x(b.height - depth)}
                width={Math.max(2, x(b.height + depth) - x(b.height - depth))}
                y={TOP}
                height={HIGH}
              />
              <line x1={x(b.height)} x2={x(b.height)} y1={TOP} y2={TOP + HIGH} />
              <text x={x(b.height)} y={TOP + 13} textAnchor="middle">
                {b.layer < 0 ? '–' : layers[b.layer]!.index}
              </text>
            </g>
          ))}
          <g
            className="marker"
            tabIndex={0}
            role="slider"
            aria-label={moves === 'head' ? 'Head offset' : 'Stage offset'}
            aria-orientation="horizontal"
            aria-valuenow={Number(shownZ.toFixed(3))}
            aria-valuemin={stageLow}
            aria-valuemax={stageHigh}
            aria-valuetext={`${tag}, in focus at bench height ${signed(focus)} mm`}
            data-testid="marker"
            onPointerDown={dragMarker}
            onPointerMove={dragMarker}
            onKeyDown={keyMarker}
          >
            <rect className="reach" x={markerX - 9} y={0} width={18} height={TOP + HIGH} />
            <line x1={markerX} x2={markerX} y1={TOP - 4} y2={TOP + HIGH} />
            <rect
              className="tag"
              x={Math.max(0, Math.min(wide - 84, markerX - 42))}
              y={1}
              width={84}
              height={18}
              rx={4}
            />
            <text x={Math.max(42, Math.min(wide - 42, markerX))} y={14} textAnchor="middle">
              {tag}
            </text>
          </g>
        </svg>
      </div>
      <p className="strip-foot" aria-live="polite">
        {copper && copper.elements.length === 0
          ? 'Draw something, and its heights appear here.'
          : lost > 1e-4
            ? `With these layers ${show(lost, 2)} mm² of copper is not reached.`
            : layers.length > 0
              ? `${layers.length === 1 ? '1 layer reaches' : `${layers.length} layers reach`} all copper that can be in focus. Drag the marker to move the focus; click a band to see its layer alone, drag it to move the layer.`
              : ''}
      </p>
    </section>
  );
}

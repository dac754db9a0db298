/** Facts about what is selected: numbers, margins with bars, and the edits that belong to it. */
import { useMemo } from 'react';
import type { Element } from '../core/project/schema.ts';
import { selectedDrape } from '../store/drapes.ts';
import { marginsOf, placeOf } from '../store/margins.ts';
import { current, type State } from '../store/state.ts';
import { show } from '../store/units.ts';
import { DrapeFacts, DrawnFacts } from './drape-facts.tsx';
import { ChoiceField, Fact, NumberField, PlaceField, TextField } from './fields.tsx';
import { MarginRow } from './margin-row.tsx';
import { useLook, useWindow } from './window.tsx';

export function Facts() {
  const { store } = useWindow();
  const state = useLook((s) => s);
  const { project, selection } = state;
  const chosen = project?.circuit.elements.filter((e) => selection.includes(e.id)) ?? [];
  const drape = selectedDrape(project, selection);
  return (
    <aside className="facts" aria-label="Facts">
      {!project ? (
        <p className="dim">Facts about what is selected appear here.</p>
      ) : selection.length === 0 ? (
        <Everything state={state} />
      ) : selection.length === 1 ? (
        chosen.length === 1 ? (
          <One element={chosen[0]!} state={state} />
        ) : drape ? (
          <DrapeFacts drape={drape} state={state} />
        ) : (
          <DrawnFacts id={selection[0]!} state={state} />
        )
      ) : (
        <>
          <h2>{selection.length} elements</h2>
          <p className="ids">{selection.join(', ')}</p>
          <p className="row">
            <button type="button" onClick={() => store.deleteSelected()}>
              Delete them
            </button>
          </p>
        </>
      )}
      <Pointer state={state} />
    </aside>
  );
}

function Everything({ state }: { state: State }) {
  const project = state.project!;
  const { copper, plan } = current(state);
  // Elements of drawings count once they are laid.
  const elements = [...project.circuit.elements, ...(copper?.elements.filter((e) => e.drape !== null) ?? [])];
  const nets = new Set(elements.map((e) => e.net).filter(Boolean));
  const length = copper?.elements.reduce((n, e) => n + (e.kind === 'trace' ? e.length : 0), 0) ?? 0;
  return (
    <>
      <h2>{project.name}</h2>
      <dl>
        <Fact label="Elements">{elements.length}</Fact>
        <Fact label="Nets">{nets.size}</Fact>
        <Fact label="Trace length">{show(length, 1)} mm</Fact>
        <Fact label="Copper">
          {copper && copper.covered !== null ? `${show(copper.covered, 1)} mm²` : '…'}
        </Fact>
        {plan && <Fact label="Layers">{plan.layers.length}</Fact>}
      </dl>
      <p className="dim">Click copper to see its margins.</p>
    </>
  );
}

function One({ element: e, state }: { element: Element; state: State }) {
  const { store, showPlace } = useWindow();
  const project = state.project!;
  const { copper, reach, plan } = current(state);
  const index = copper?.elements.findIndex((c) => c.id === e.id) ?? -1;
  const laid = copper?.elements[index];
  const margins = useMemo(
    () =>
      copper && index >= 0
        ? marginsOf(index, copper, state.setup, reach, plan, project.limits, project.material)
        : [],
    [copper, index, state.setup, reach, plan, project.limits, project.material],
  );
  const layers = new Set<number>();
  if (laid && plan) for (let t = laid.first; t < laid.first + laid.count; t++) layers.add(plan.layerOf[t]!);
  const edit = (what: string, change: Record<string, unknown>) =>
    store.act({ kind: 'edit-element', id: e.id, what, change });
  const names = { trace: 'Trace', pad: 'Pad', region: 'Region' };
  return (
    <>
      <h2>
        {names[e.kind]} {e.id}
      </h2>
      <TextField label="Net" value={e.net} placeholder="no net" onValue={(net) => edit('net', { net })} />
      {e.kind === 'trace' && (
        <NumberField
          label="Width"
          unit="mm"
          quantity="length"
          value={e.width}
          min={0}
          open
          onValue={(width) => edit('width', { width })}
        />
      )}
      {e.kind === 'trace' && (
        <div className="two">
          <ChoiceField
            label="Ends"
            value={e.ends ?? 'round'}
            options={[
              ['round', 'round'],
              ['square', 'square'],
              ['butt', 'butt'],
            ]}
            onValue={(ends) => edit('ends', { ends })}
          />
          <ChoiceField
            label="Bends"
            value={e.bends ?? 'round'}
            options={[
              ['round', 'round'],
              ['miter', 'mitred'],
            ]}
            onValue={(bends) => edit('bends', { bends })}
          />
        </div>
      )}
      {e.kind === 'pad' && <PadFields e={e} edit={edit} />}
      {laid && (
        <dl>
          <Fact label={e.kind === 'trace' ? 'Length' : 'Outline'}>{show(laid.length, 2)} mm</Fact>
          <Fact label="Copper">{show(laid.area, 2)} mm²</Fact>
          {laid.stretch > 5e-4 && <Fact label="Stretch">{show(100 * laid.stretch, 2)} %</Fact>}
          {plan && (
            <Fact label="Layers">
              {[...layers]
                .filter((l) => l >= 0)
                .sort((a, b) => a - b)
                .map((l) => plan.layers[l]!.index)
                .join(', ') || 'none'}
              {layers.has(-1) ? ' and left out in part' : ''}
            </Fact>
          )}
        </dl>
      )}
      {margins.length > 0 && (
        <section aria-label="Margins">
          <h3>Margins</h3>
          {margins.map((m) => (
            <MarginRow
              key={m.check}
              margin={m}
              onShow={() => {
                const p = placeOf(copper!, m.at);
                showPlace(p.point, p.normal);
              }}
            />
          ))}
        </section>
      )}
      {e.kind !== 'pad' && <Points e={e} />}
      <p className="row">
        <button type="button" onClick={() => store.deleteSelected()}>
          Delete {e.id}
        </button>
      </p>
    </>
  );
}

function PadFields({
  e,
  edit,
}: {
  e: Extract<Element, { kind: 'pad' }>;
  edit(what: string, change: Record<string, unknown>): void;
}) {
  const { store } = useWindow();
  const s = e.shape;
  return (
    <>
      {'circle' in s && (
        <NumberField
          label="Diameter"
          unit="mm"
          quantity="length"
          value={s.circle}
          min={0}
          open
          onValue={(v) => edit('size', { shape: { circle: v } })}
        />
      )}
      {('rect' in s || 'slot' in s) && (
        <div className="two">
          {[0, 1].map((k) => {
            const both = 'rect' in s ? s.rect : s.slot;
            return (
              <NumberField
                key={k}
                label={k === 0 ? 'Length' : 'Breadth'}
                unit="mm"
                quantity="length"
                value={both[k]!}
                min={0}
                open
                onValue={(v) => {
                  const next = both.map((b, i) => (i === k ? v : b));
                  edit('size', { shape: 'rect' in s ? { rect: next } : { slot: next } });
                }}
              />
            );
          })}
        </div>
      )}
      <NumberField
        label="Turn"
        unit="°"
        quantity="angle"
        value={e.turn}
        onValue={(turn) => edit('turn', { turn })}
      />
      <PlaceField label="Place" at={e.at} onPlace={(at) => store.act({ kind: 'move-pad', id: e.id, at })} />
    </>
  );
}

function Points({ e }: { e: Extract<Element, { kind: 'trace' | 'region' }> }) {
  const { store } = useWindow();
  const points = e.kind === 'trace' ? e.route : e.outline;
  return (
    <details className="points">
      <summary>{points.length} points, mm in the part</summary>
      {points.map((p, i) => (
        // biome-ignore lint/suspicious/noArrayIndexKey: a point is known by its place in the route
        <div key={i} className="point">
          <PlaceField
            label={`${i + 1}`}
            at={p.at}
            onPlace={(at) => store.act({ kind: 'move-point', id: e.id, index: i, at })}
          />
          <button
            type="button"
            aria-label={`Take point ${i + 1} out`}
            disabled={points.length <= (e.kind === 'trace' ? 2 : 3)}
            onClick={() => store.act({ kind: 'remove-point', id: e.id, index: i })}
          >
            −
          </button>
        </div>
      ))}
    </details>
  );
}

/** What is under the pointer. */
function Pointer({ state }: { state: State }) {
  const h = state.hover;
  const { copper, reach } = current(state);
  if (!h) return null;
  const defocus = h.probe.height + state.offset;
  const e = copper?.elements[h.element];
  return (
    <section className="pointer" aria-label="Under the pointer">
      <h3>Under the pointer{e ? `: ${e.id}` : ''}</h3>
      <dl>
        <Fact label="Bench height">{show(h.probe.height, 2)} mm</Fact>
        <Fact label="Defocus now">{show(defocus, 2)} mm</Fact>
        <Fact label="Incidence">{show(h.probe.incidence, 1)}°</Fact>
        {h.probe.blockedAfter !== null && (
          <Fact label="Beam">meets the part {show(h.probe.blockedAfter, 1)} mm above</Fact>
        )}
        {reach && h.triangle >= 0 && <Fact label="Dose">{show(reach.fluence[h.triangle]!, 2)} J/cm²</Fact>}
      </dl>
    </section>
  );
}

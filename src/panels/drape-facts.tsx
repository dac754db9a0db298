/** Facts about a drawing on the part, and about one element of it. */
import { useMemo } from 'react';
import type { Drape } from '../core/project/schema.ts';
import { type DrapeChange, lastName } from '../store/document.ts';
import { drapeSums, LINE_WIDTH, normalNear } from '../store/drapes.ts';
import { marginsOf, placeOf } from '../store/margins.ts';
import { current, type State } from '../store/state.ts';
import { show } from '../store/units.ts';
import type { ElementPicture } from '../worker/pictures.ts';
import { DrapeNets, DrawnNet } from './drape-nets.tsx';
import { ChoiceField, Fact, NumberField, PlaceField, TickField } from './fields.tsx';
import { MarginRow } from './margin-row.tsx';
import { useWindow } from './window.tsx';

export function DrapeFacts({ drape: d, state }: { drape: Drape; state: State }) {
  const { store } = useWindow();
  const { copper } = current(state);
  const { elements, length, area, worst } = useMemo(() => drapeSums(copper, d.id), [copper, d.id]);
  const read = copper?.drawings.find((r) => r.drape === d.id);
  const edit = (what: string, change: DrapeChange) =>
    store.act({ kind: 'edit-drape', id: d.id, what, change });
  return (
    <>
      <h2>Drawing {d.id}</h2>
      <p className="dim">{lastName(d.drawing)}</p>
      <PlaceField
        label="Anchor"
        at={d.anchor}
        onPlace={(at) => store.act({ kind: 'move-drape', id: d.id, at })}
      />
      <div className="two">
        {[0, 1].map((k) => (
          <NumberField
            key={k}
            label={k === 0 ? 'Origin u' : 'Origin v'}
            unit="mm"
            quantity="length"
            value={d.origin[k]!}
            onValue={(v) => edit('origin', { origin: k === 0 ? [v, d.origin[1]] : [d.origin[0], v] })}
          />
        ))}
      </div>
      <NumberField
        label="Turn"
        unit="°"
        quantity="angle"
        value={d.turn}
        onValue={(turn) => edit('turn', { turn })}
      />
      <p className="dim">Drag it on the part. The wheel over it, or Alt with the arrows, turns it.</p>
      <TickField label="Mirrored" value={d.mirror} onValue={(mirror) => edit('mirror', { mirror })} />
      <TickField
        label="Even out lengths"
        value={d.evenLengths}
        onValue={(evenLengths) => edit('evening', { evenLengths })}
      />
      <ChoiceField
        label="Lines"
        value={d.lay ?? 'as drawn'}
        options={[
          ['as drawn', 'as drawn'],
          ['pulled straight', 'pulled straight'],
        ]}
        onValue={(lay) => edit('lines', { lay })}
      />
      <h3>How the file is read</h3>
      <ChoiceField
        label="Unit"
        value={d.units ?? 'file'}
        options={UNITS}
        onValue={(v) => edit('unit', { units: v === 'file' ? undefined : v })}
      />
      <p className="dim">The unit counts only where the file says none.</p>
      <NumberField
        label="Lines without width"
        unit="mm"
        quantity="length"
        value={d.lineWidth ?? LINE_WIDTH}
        min={0}
        open
        onValue={(lineWidth) => edit('width of lines without one', { lineWidth })}
      />
      {read &&
        read.layers.length > 1 &&
        read.layers.map((layer) => (
          <TickField
            key={layer}
            label={`Layer ${layer || 'without a name'}`}
            value={d.drawingLayers[layer] !== 'skip'}
            onValue={(on) => {
              const { [layer]: _, ...others } = d.drawingLayers;
              edit('layers', { drawingLayers: on ? others : { ...others, [layer]: 'skip' } });
            }}
          />
        ))}
      {read && <DrapeNets drape={d} flat={read.flat} />}
      <dl>
        <Fact label="Elements">{copper ? elements.length : '…'}</Fact>
        <Fact label="Line length">{show(length, 1)} mm</Fact>
        <Fact label="Copper">{show(area, 2)} mm²</Fact>
      </dl>
      {worst && <Stretch e={worst} state={state} />}
      <p className="row">
        <button type="button" aria-pressed={state.flatShown} onClick={() => store.showFlat(!state.flatShown)}>
          Flat drawing
        </button>
        <button type="button" onClick={() => store.deleteSelected()}>
          Delete {d.id}
        </button>
      </p>
    </>
  );
}

const UNITS = [
  ['file', 'its own'],
  ['mm', 'millimetre'],
  ['inch', 'inch'],
  ['um', 'micrometre'],
  ['cm', 'centimetre'],
  ['m', 'metre'],
] as const;

/** The worst stretch of an element, with the way to its place. */
function Stretch({ e, state }: { e: ElementPicture; state: State }) {
  const { showPlace, store } = useWindow();
  const { copper } = current(state);
  const { maxStretch, safeStretch } = state.project!.limits;
  const at = e.stretched?.at ?? e.anchor;
  return (
    <section aria-label="Stretch">
      <h3>Stretch</h3>
      <MarginRow
        margin={{
          label: `Most, in ${e.id}`,
          ok: e.stretch <= maxStretch,
          value: 100 * e.stretch,
          limit: 100 * maxStretch,
          unit: '%',
          share: maxStretch > 0 ? e.stretch / maxStretch : e.stretch > 0 ? 2 : 0,
        }}
        onShow={() => copper && showPlace(at, normalNear(copper, e, at))}
      />
      <dl>
        {e.stretched && <Fact label="Along it there">{percent(e.stretched.along)}</Fact>}
        {e.stretched && <Fact label="Across it">{percent(e.stretched.across)}</Fact>}
        <Fact label="Safe up to">{show(100 * safeStretch, 1)} %</Fact>
      </dl>
      <TickField
        label="Colour all drawings by stretch"
        value={state.stretchShown}
        onValue={store.showStretch}
      />
    </section>
  );
}

const percent = (ratio: number): string =>
  `${show(100 * Math.abs(ratio - 1), 2)} % ${ratio >= 1 ? 'longer' : 'shorter'}`;

const NAMES = { trace: 'Trace', pad: 'Pad', region: 'Region' } as const;

/** One element of a drawing: it is changed in its file, not here. */
export function DrawnFacts({ id, state }: { id: string; state: State }) {
  const { store, showPlace } = useWindow();
  const project = state.project!;
  const { copper, reach, plan } = current(state);
  const index = copper?.elements.findIndex((c) => c.id === id) ?? -1;
  const e = copper?.elements[index];
  if (!copper || !e) return <h2>{id}</h2>;
  const margins = marginsOf(index, copper, state.setup, reach, plan, project.limits, project.material);
  return (
    <>
      <h2>
        {NAMES[e.kind]} {id}
      </h2>
      <DrawnNet id={id} drape={e.drape} net={e.net} state={state} />
      <dl>
        <Fact label={e.kind === 'trace' ? 'Length' : 'Outline'}>{show(e.length, 2)} mm</Fact>
        <Fact label="As drawn">{show(e.drawnLength, 2)} mm</Fact>
        <Fact label="Copper">{show(e.area, 2)} mm²</Fact>
      </dl>
      <Stretch e={e} state={state} />
      {margins.length > 0 && (
        <section aria-label="Margins">
          <h3>Margins</h3>
          {margins.map((m) => (
            <MarginRow
              key={m.check}
              margin={m}
              onShow={() => {
                const p = placeOf(copper, m.at);
                showPlace(p.point, p.normal);
              }}
            />
          ))}
        </section>
      )}
      <p className="row">
        <button type="button" onClick={() => store.select([e.drape!])}>
          The whole drawing {e.drape}
        </button>
      </p>
    </>
  );
}

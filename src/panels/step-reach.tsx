/** Reach: what the beam cannot write and why, with the limits that decide it. */
import { REASONS, type Reason } from '../core/reach/result.ts';
import { placeOf } from '../store/margins.ts';
import { current } from '../store/state.ts';
import { show } from '../store/units.ts';
import { overview } from '../store/words.ts';
import { NumberField, TickField } from './fields.tsx';
import { Swatch } from './swatch.tsx';
import { useSteady, useWindow } from './window.tsx';

const MENDS: Record<Exclude<Reason, 'focus'>, string> = {
  incidence: 'Tilt the part toward the head, or move the copper to a flatter place.',
  shade: 'Move the copper out from under the part, or turn the part.',
  field: 'Move the part to the middle of the field.',
  dose: 'Change power, beam diameter or the dose window.',
};

export function ReachStep() {
  const { store, showPlace } = useWindow();
  const state = useSteady();
  const { project } = state;
  const { copper, reach, plan } = current(state);
  const counts = copper && reach ? overview(copper, state.setup, reach, plan).counts : null;
  if (!project) return <p>Open a part first.</p>;
  const set = (key: string, what: string, value: unknown) =>
    store.act({ kind: 'set', path: ['limits', key], what, value });
  const bad = counts
    ? REASONS.filter((r): r is Exclude<Reason, 'focus'> => r !== 'focus' && counts[r].elements.length > 0)
    : [];
  return (
    <>
      {counts && copper && copper.elements.length > 0 && bad.length === 0 && (
        <p>The beam can write all copper drawn so far.</p>
      )}
      {copper &&
        counts &&
        reach &&
        bad.map((r) => {
          const bit = 1 << REASONS.indexOf(r);
          const worst = reach.fails.findIndex((f) => (f & bit) !== 0);
          return (
            <div key={r} className="trouble">
              <p>
                <Swatch look={r} /> <b>{counts[r].elements.map((i) => copper.elements[i]!.id).join(', ')}</b>{' '}
                — {show(counts[r].area, 2)} mm²
              </p>
              <p className="dim">{MENDS[r]}</p>
              <p className="row">
                <button
                  type="button"
                  onClick={() => store.select(counts[r].elements.map((i) => copper.elements[i]!.id))}
                >
                  Select
                </button>
                <button
                  type="button"
                  onClick={() => {
                    const p = placeOf(copper, worst);
                    showPlace(p.point, p.normal);
                  }}
                >
                  Show me
                </button>
              </p>
            </div>
          );
        })}
      {copper && copper.elements.length > 0 && !plan && !state.busy && (
        <p className="row">
          <button type="button" onClick={() => store.again()}>
            Look again
          </button>
        </p>
      )}
      <h3>Limits</h3>
      <NumberField
        label="Steepest incidence"
        unit="°"
        quantity="angle"
        value={project.limits.maxIncidence}
        min={0}
        max={90}
        open
        onValue={(v) => set('maxIncidence', 'steepest incidence', v)}
      />
      <NumberField
        label="Clearance under the lens"
        unit="mm"
        quantity="length"
        value={project.limits.clearance}
        min={0}
        onValue={(v) => set('clearance', 'clearance', v)}
      />
      <TickField
        label="Look at the whole cone of the beam"
        value={project.limits.cone}
        onValue={(v) => set('cone', 'cone of the beam', v)}
      />
      {project.limits.cone && (
        <NumberField
          label="Most that may be blocked"
          unit="%"
          value={100 * project.limits.maxBlocked}
          min={0}
          max={100}
          onValue={(v) => set('maxBlocked', 'most blocked', v / 100)}
        />
      )}
    </>
  );
}

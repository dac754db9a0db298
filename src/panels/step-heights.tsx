/** Heights: the layers, the stage that takes them, and the way back to the fewest. */
import { current } from '../store/state.ts';
import { setupsOf } from '../store/store.ts';
import { show, signed } from '../store/units.ts';
import { ChoiceField, NumberField } from './fields.tsx';
import { useSteady, useWindow } from './window.tsx';

export function HeightsStep() {
  const { store } = useWindow();
  const state = useSteady();
  const { project } = state;
  const { copper, plan } = current(state);
  if (!project) return <p>Open a part first.</p>;
  const { stage, scan } = project;
  const set = (path: readonly (string | number)[], what: string, value: unknown) =>
    store.act({ kind: 'set', path, what, value });
  const sign = stage.zMoves === 'head' ? 1 : -1;
  const byHand = setupsOf(project)[state.setup]?.focusHeights !== undefined;
  return (
    <>
      {plan && plan.layers.length > 0 ? (
        <>
          <table className="layers">
            <caption>{byHand ? 'Heights set by hand' : 'The fewest layers there are'}</caption>
            <thead>
              <tr>
                <th scope="col">Layer</th>
                <th scope="col">Set Z to</th>
                <th scope="col">Worst defocus</th>
                <th scope="col">
                  <span className="sr">Alone</span>
                </th>
              </tr>
            </thead>
            <tbody>
              {plan.layers.map((l, i) => (
                <tr key={l.index}>
                  <th scope="row">{l.index}</th>
                  <td>{signed(sign * l.focusHeight)}</td>
                  <td>{show(l.worstDefocus, 2)}</td>
                  <td>
                    <button
                      type="button"
                      aria-pressed={state.isolated === i}
                      onClick={() => store.isolate(i)}
                    >
                      Alone
                    </button>
                  </td>
                </tr>
              ))}
            </tbody>
          </table>
          <p className="dim">
            {stage.zMoves === 'head'
              ? 'The head moves; + lifts the head, away from the part.'
              : 'The stage moves; + lifts the part toward the head.'}{' '}
            All in mm.
          </p>
          <p className="row">
            <button type="button" disabled={!byHand} onClick={() => store.fewest()}>
              Put the fewest back
            </button>
          </p>
          {copper && plan.unreached.length > 0 && (
            <p className="wrong">
              Not reached:{' '}
              {[...new Set(plan.unreached.map((u) => copper.elements[u.element]?.id))].join(', ')}.
            </p>
          )}
        </>
      ) : (
        <p className="dim">The layers appear as soon as there is copper that the beam can reach.</p>
      )}
      <h3>Stage</h3>
      <ChoiceField
        label="What moves in Z"
        value={stage.zMoves}
        options={[
          ['stage', 'the stage'],
          ['head', 'the head'],
        ]}
        onValue={(v) => set(['stage', 'zMoves'], 'what moves in Z', v)}
      />
      <NumberField
        label="Smallest step"
        unit="mm"
        quantity="length"
        value={stage.step}
        min={0}
        onValue={(v) => set(['stage', 'step'], 'step of the stage', v)}
      />
      <div className="two">
        <NumberField
          label="Lowest"
          unit="mm"
          quantity="length"
          value={stage.range[0]}
          max={stage.range[1]}
          open
          onValue={(v) => set(['stage', 'range', 0], 'range of the stage', v)}
        />
        <NumberField
          label="Highest"
          unit="mm"
          quantity="length"
          value={stage.range[1]}
          min={stage.range[0]}
          open
          onValue={(v) => set(['stage', 'range', 1], 'range of the stage', v)}
        />
      </div>
      <NumberField
        label="Stitch"
        unit="mm"
        quantity="length"
        value={scan.stitch}
        min={0}
        onValue={(v) => set(['scan', 'stitch'], 'stitch', v)}
      />
    </>
  );
}

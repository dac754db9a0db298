/** Files: the scan settings, writing, and what to do at the bench, with the cautions that belong to it. */
import { CAUTIONS } from '../core/files/cautions.ts';
import type { Report } from '../core/project/report.ts';
import { ruleWords } from '../core/project/rule-words.ts';
import { hasCircuit, isUnsaved } from '../store/state.ts';
import { show, signed } from '../store/units.ts';
import { NumberField } from './fields.tsx';
import { useSteady, useWindow } from './window.tsx';

const CHECKS = ['focus', 'incidence', 'shade', 'field', 'dose'] as const;

/** Which checks fail, and for whom; a click selects them. */
function Failing({ report }: { report: Report }) {
  const { store } = useWindow();
  const rows = [
    ...CHECKS.map((c) => ({
      what: c as string,
      ids: report.elements.filter((e) => !e[c].ok).map((e) => e.id),
    })),
    ...report.rules.map((r) => ({
      what: `${ruleWords(r)} (${r.level})`,
      ids: r.elements,
    })),
  ].filter((r) => r.ids.length > 0);
  if (rows.length === 0) return null;
  return (
    <ul className="failing" aria-label="Checks that fail">
      {rows.map((r) => (
        <li key={r.what + r.ids.join()}>
          <button type="button" onClick={() => store.select(r.ids)}>
            {r.what}: {r.ids.join(', ')}
          </button>
        </li>
      ))}
    </ul>
  );
}

export function FilesStep() {
  const { store, run } = useWindow();
  const state = useSteady();
  const { project, exported } = state;
  if (!project) return <p>Open a part first.</p>;
  const set = (key: string, what: string, value: unknown) =>
    store.act({ kind: 'set', path: ['scan', key], what, value });
  const fresh = exported && exported.revision === state.revision;
  const report = exported?.report;
  return (
    <>
      <div className="caution" role="note">
        {CAUTIONS.map((c) => (
          <p key={c.word}>
            <b>{c.word}</b> {c.text}
          </p>
        ))}
      </div>
      <p className="row">
        <button
          type="button"
          className="main"
          disabled={!state.part || !hasCircuit(project)}
          onClick={() => run('export')}
        >
          Write the scan files…
        </button>
      </p>
      {isUnsaved(state) && <p className="dim">The project itself is not saved yet.</p>}
      {exported && report && (
        <section aria-label="What was written">
          <h3>{fresh ? 'Written' : 'Written before the last change'}</h3>
          <p>
            {exported.files} files in <span className="path">{exported.folder}</span>
          </p>
          <p className={report.ok ? 'good' : 'wrong'}>
            {report.ok ? 'Every check holds.' : 'A check fails; the report says which.'}{' '}
            {report.proof &&
              `Read back: ${show(100 * report.proof.covered, 2)} % covered, ${show(report.proof.stray_mm2, 3)} mm² stray, opens: ${report.proof.opens.map((o) => o.join('–')).join(', ') || 'none'}, shorts: ${report.proof.shorts.map((o) => o.join('–')).join(', ') || 'none'}.`}
          </p>
          {report.collisions.map((c) => (
            <p key={`${c.setup} ${c.layer}`} className="wrong">
              In setup “{c.setup}”, layer {c.layer}, the part would stand {show(c.height, 1)} mm above the
              focal plane under the lens body. No scan files were written.
            </p>
          ))}
          <Failing report={report} />
          {report.setups.map((s) => (
            <table key={s.name} className="layers">
              <caption>Setup “{s.name}”, in this order</caption>
              <thead>
                <tr>
                  <th scope="col">Layer</th>
                  <th scope="col">Set Z to</th>
                  <th scope="col">Time</th>
                </tr>
              </thead>
              <tbody>
                {s.layers.map((l) => (
                  <tr key={l.index}>
                    <th scope="row">{l.index}</th>
                    <td>{signed(l.zOffset)} mm</td>
                    <td>{show(l.time, 0)} s</td>
                  </tr>
                ))}
              </tbody>
            </table>
          ))}
          <p className="dim">
            {project.stage.zMoves === 'head'
              ? 'The head moves; + lifts the head.'
              : 'The stage moves; + lifts the part.'}
          </p>
        </section>
      )}
      <h3>Scan</h3>
      <NumberField
        label="Line pitch on the surface"
        unit="mm"
        quantity="length"
        digits={4}
        value={project.scan.linePitch}
        min={0}
        open
        onValue={(v) => set('linePitch', 'line pitch', v)}
      />
      <NumberField
        label="Mark speed"
        unit="mm/s"
        value={project.scan.markSpeed}
        min={0}
        open
        onValue={(v) => set('markSpeed', 'mark speed', v)}
      />
      <NumberField
        label="Jump speed"
        unit="mm/s"
        value={project.scan.jumpSpeed}
        min={0}
        open
        onValue={(v) => set('jumpSpeed', 'jump speed', v)}
      />
      <NumberField
        label="Passes"
        unit=""
        value={project.scan.passes}
        min={1}
        max={100}
        onValue={(v) => set('passes', 'passes', Math.round(v))}
      />
    </>
  );
}

/** Circuit: what is drawn, and what the next stroke will be. */
import { ruleWords } from '../core/project/rule-words.ts';
import { lastName } from '../store/document.ts';
import { drapeSums } from '../store/drapes.ts';
import { toggled } from '../store/flat.ts';
import { current } from '../store/state.ts';
import { show } from '../store/units.ts';
import { ChoiceField, NumberField, TextField } from './fields.tsx';
import { Nets } from './nets.tsx';
import { useSteady, useWindow } from './window.tsx';

export function CircuitStep() {
  const { store } = useWindow();
  const state = useSteady();
  const { project, pen, tool, selection } = state;
  const { copper, rules } = current(state);
  if (!project) return <p>Open a part first.</p>;
  const round = 'circle' in pen.shape;
  const size = 'circle' in pen.shape ? pen.shape.circle : 'rect' in pen.shape ? pen.shape.rect[0] : 1.6;
  const size2 = 'rect' in pen.shape ? pen.shape.rect[1] : size;
  const chosen = new Set(selection);
  return (
    <>
      <p className="row">
        <button
          type="button"
          aria-pressed={tool.kind === 'trace'}
          disabled={!state.part}
          onClick={() => store.setTool(tool.kind === 'trace' ? 'look' : 'trace')}
        >
          Draw a trace
        </button>
        <button
          type="button"
          aria-pressed={tool.kind === 'pad'}
          disabled={!state.part}
          onClick={() => store.setTool(tool.kind === 'pad' ? 'look' : 'pad')}
        >
          Place pads
        </button>
      </p>
      <div className="two">
        <NumberField
          label="Trace width"
          value={pen.width}
          unit="mm"
          quantity="length"
          min={0}
          open
          onValue={(width) => store.setPen({ width })}
        />
        <TextField
          label="Net"
          value={pen.net}
          placeholder="as its pad"
          onValue={(net) => store.setPen({ net })}
        />
      </div>
      <ChoiceField
        label="Pad shape"
        value={round ? 'circle' : 'rect'}
        options={[
          ['circle', 'round'],
          ['rect', 'rectangle'],
        ]}
        onValue={(v) => store.setPen({ shape: v === 'circle' ? { circle: size } : { rect: [size, size2] } })}
      />
      <div className="two">
        <NumberField
          label={round ? 'Pad diameter' : 'Pad length'}
          value={size}
          unit="mm"
          quantity="length"
          min={0}
          open
          onValue={(v) => store.setPen({ shape: round ? { circle: v } : { rect: [v, size2] } })}
        />
        {!round && (
          <NumberField
            label="Pad breadth"
            value={size2}
            unit="mm"
            quantity="length"
            min={0}
            open
            onValue={(v) => store.setPen({ shape: { rect: [size, v] } })}
          />
        )}
      </div>
      {project.circuit.drapes.length > 0 && (
        <>
          <h3>Drawings</h3>
          <ul className="elements" aria-label="Drawings">
            {project.circuit.drapes.map((d) => {
              const read = copper?.drawings.find((r) => r.drape === d.id);
              const { elements, area } = drapeSums(copper, d.id);
              return (
                <li key={d.id}>
                  <button
                    type="button"
                    aria-pressed={chosen.has(d.id)}
                    onClick={(ev) =>
                      store.select(
                        ev.shiftKey || ev.ctrlKey || ev.metaKey ? toggled(selection, d.id) : [d.id],
                      )
                    }
                  >
                    <span className="id">{d.id}</span>
                    <span className="dim">{lastName(d.drawing)}</span>
                    <span className="count">
                      {elements.length > 0
                        ? `${elements.length} · ${show(area, 1)} mm²`
                        : read && read.shapes === 0 && read.rims.length > 0
                          ? `${read.holes} hole${read.holes === 1 ? '' : 's'}`
                          : 'not laid'}
                    </span>
                  </button>
                  {read && read.notes.length > 0 && (
                    <ul className="notes" aria-label={`What the reader says of ${d.id}`}>
                      {read.notes.map((n) => (
                        <li key={n.code + n.place}>
                          {n.text}
                          {n.count > 1 ? `, ${n.count} times` : ''}
                          {n.place ? ` (${n.count > 1 ? 'first ' : ''}${n.place})` : ''}
                        </li>
                      ))}
                    </ul>
                  )}
                </li>
              );
            })}
          </ul>
        </>
      )}
      <h3>{project.circuit.drapes.length > 0 ? 'Drawn here' : 'Drawn'}</h3>
      {project.circuit.elements.length === 0 && (
        <p className="dim">
          Nothing yet. Choose “Draw a trace” and click along the part, or drop a drawing on it.
        </p>
      )}
      <ul className="elements" aria-label="Elements">
        {project.circuit.elements.map((e) => {
          const laid = copper?.elements.find((c) => c.id === e.id);
          return (
            <li key={e.id}>
              <button
                type="button"
                aria-pressed={chosen.has(e.id)}
                onClick={(ev) =>
                  store.select(ev.shiftKey || ev.ctrlKey || ev.metaKey ? toggled(selection, e.id) : [e.id])
                }
              >
                <span className="id">{e.id}</span>
                <span className="dim">{e.net || 'no net'}</span>
                <span className="count">
                  {laid
                    ? e.kind === 'trace'
                      ? `${show(laid.length, 1)} mm`
                      : `${show(laid.area, 2)} mm²`
                    : e.kind}
                </span>
              </button>
            </li>
          );
        })}
      </ul>
      <Nets state={state} />
      {[
        ...(copper?.problems ?? []).map(
          (p) => `${p.file === project.name ? '' : `${p.file}, `}${p.place}: ${p.problem}; ${p.mend}.`,
        ),
        ...(copper?.findings ?? []).map((f) => `${f.element}: ${f.text}.`),
        ...rules.map((r) => `${r.elements.join(' and ')}: ${ruleWords(r)}.`),
      ].map((t) => (
        <p key={t} className="wrong">
          {t}
        </p>
      ))}
    </>
  );
}

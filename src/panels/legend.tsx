/** What the colours say, with counts. A row selects what it counts. */
import { useMemo } from 'react';
import type { Limits } from '../core/project/schema.ts';
import { REASONS } from '../core/reach/result.ts';
import { stretchRows } from '../store/drapes.ts';
import { countLooks, plainDepth } from '../store/looks.ts';
import { current } from '../store/state.ts';
import { show } from '../store/units.ts';
import type { CopperPicture } from '../worker/pictures.ts';
import { StretchSwatch, Swatch } from './swatch.tsx';
import { useSteady, useWindow } from './window.tsx';

const WORDS = {
  reached: 'Reached',
  focus: 'Out of focus',
  incidence: 'Too oblique',
  shade: 'Shaded',
  field: 'Off the field',
  dose: 'Wrong dose',
} as const;

export function Legend() {
  const { store } = useWindow();
  const state = useSteady();
  const { copper, reach, plan } = current(state);
  const depth = state.project ? plainDepth(state.project.limits, reach) : 0;
  const counts = useMemo(
    () =>
      copper
        ? countLooks(copper, state.setup, reach, plan, { show: state.show, offset: state.offset, depth })
        : null,
    [copper, reach, plan, state.setup, state.show, state.offset, depth],
  );
  if (!copper || !counts || copper.elements.length === 0) return null;
  if (state.stretchShown && state.project)
    return <StretchLegend copper={copper} limits={state.project.limits} />;
  return (
    <section className="legend" aria-label="What the colours say">
      <p className="legend-head">{state.show === 'offset' ? 'At this offset' : 'As the layers write it'}</p>
      <ul>
        {(['reached', ...REASONS] as const).map((look) => {
          const { elements, area } = counts[look];
          if (elements.length === 0 && look !== 'reached' && look !== 'focus') return null;
          return (
            <li key={look}>
              <button
                type="button"
                disabled={elements.length === 0}
                data-look={look}
                onClick={() => store.select(elements.map((i) => copper.elements[i]!.id))}
                title="Select these"
              >
                <Swatch look={look} />
                <span>{WORDS[look]}</span>
                <span className="count">
                  {elements.length} <span className="dim">· {show(area, area < 10 ? 1 : 0)} mm²</span>
                </span>
              </button>
            </li>
          );
        })}
      </ul>
    </section>
  );
}

function StretchLegend({ copper, limits }: { copper: CopperPicture; limits: Limits }) {
  const { store } = useWindow();
  return (
    <section className="legend" aria-label="What the colours say">
      <p className="legend-head">Longer or shorter than drawn, at most</p>
      <ul>
        {stretchRows(copper, limits)
          .filter((r) => r.look !== 'drawn-here' || r.elements.length > 0)
          .map(({ look, words, elements, area }) => (
            <li key={look}>
              <button
                type="button"
                disabled={elements.length === 0}
                data-stretch={look}
                onClick={() => store.select(elements.map((e) => e.id))}
                title="Select these"
              >
                <StretchSwatch look={look} />
                <span>{words}</span>
                <span className="count">
                  {elements.length} <span className="dim">· {show(area, area < 10 ? 1 : 0)} mm²</span>
                </span>
              </button>
            </li>
          ))}
      </ul>
    </section>
  );
}

/** The state of each step of the job in words, and whether it wants attention. */
import { REASONS, type Reason } from '../core/reach/result.ts';
import type { CopperPicture, PlanPicture, ReachPicture } from '../worker/pictures.ts';
import { type Counts, countLooks } from './looks.ts';
import { current, hasCircuit, type State, type StepName } from './state.ts';
import { show } from './units.ts';

export interface StepWords {
  words: string;
  /** `open`: nothing there yet. `look`: something wants a look. */
  mark: 'open' | 'good' | 'look';
}

export const REASON_WORDS: Record<Reason, [one: string, many: string]> = {
  focus: ['is out of focus', 'are out of focus'],
  incidence: ['is too oblique', 'are too oblique'],
  shade: ['is shaded', 'are shaded'],
  field: ['is off the field', 'are off the field'],
  dose: ['has the wrong dose', 'have the wrong dose'],
};

interface Overview {
  counts: Counts;
  /** Steepest incidence, degrees. */
  steep: number;
  /** Copper that no layer writes, mm². */
  lost: number;
}

const known = new WeakMap<
  CopperPicture,
  { setup: number; reach: ReachPicture | null; plan: PlanPicture | null; value: Overview }
>();

/** Sums over all copper as planned; worked out once for each result. */
export function overview(
  copper: CopperPicture,
  setup: number,
  reach: ReachPicture | null,
  plan: PlanPicture | null,
): Overview {
  const before = known.get(copper);
  if (before && before.setup === setup && before.reach === reach && before.plan === plan) return before.value;
  let lost = 0;
  if (plan) for (let t = 0; t < copper.area.length; t++) if (plan.layerOf[t] === -1) lost += copper.area[t];
  let steep = 0;
  if (reach) for (const a of reach.incidence) steep = Math.max(steep, a);
  const value = {
    counts: countLooks(copper, setup, reach, plan, { show: 'layers', offset: 0, depth: 0 }),
    steep,
    lost,
  };
  known.set(copper, { setup, reach, plan, value });
  return value;
}

export function stepWords(s: State): Record<StepName, StepWords> {
  const { project, part } = s;
  const none: StepWords = { words: 'Nothing yet', mark: 'open' };
  if (!project)
    return {
      part: { words: 'Open a part or a project', mark: 'open' },
      circuit: none,
      head: none,
      reach: none,
      heights: none,
      files: none,
    };
  const { copper, reach, plan, rules } = current(s);
  const joined = s.connections?.revision === s.copper?.revision ? (s.connections?.value.rules ?? []) : [];
  const elements = project.circuit.elements;
  const count = (kind: string, word: string) => {
    const n = elements.filter((e) => e.kind === kind).length;
    return n === 0 ? [] : [`${n} ${word}${n === 1 ? '' : 's'}`];
  };
  const { drapes } = project.circuit;
  const drawn = [
    ...count('trace', 'trace'),
    ...count('pad', 'pad'),
    ...count('region', 'region'),
    ...(drapes.length === 0 ? [] : [`${drapes.length} drawing${drapes.length === 1 ? '' : 's'}`]),
  ];
  const broken = [...rules, ...joined].filter((r) => r.level === 'error').length;
  const troubles = (copper?.problems.length ?? 0) + (copper?.findings.length ?? 0);

  const size = part
    ? [0, 1, 2].map((k) => show(part.bounds[1][k as 0] - part.bounds[0][k as 0], 1)).join(' × ') + ' mm'
    : '';
  const mended = part
    ? part.mended.degenerate + part.mended.duplicate + part.mended.flipped + part.mended.split
    : 0;
  return {
    part: part
      ? {
          words:
            size + (part.closed ? '' : ', open surface') + (mended > 0 ? `, ${mended} facets mended` : ''),
          mark: part.closed && part.mended.nonManifoldEdges === 0 ? 'good' : 'look',
        }
      : { words: 'The part is missing', mark: 'look' },
    circuit:
      drawn.length === 0
        ? { words: 'Nothing drawn yet', mark: 'open' }
        : {
            words:
              drawn.join(', ') +
              (troubles ? `; ${troubles} cannot be laid` : '') +
              (broken ? `; ${broken} shop rule${broken === 1 ? '' : 's'} broken` : ''),
            mark: troubles || broken ? 'look' : 'good',
          },
    head: {
      words: `${show(project.head.focalLength, 1)} mm lens, field ${show(project.head.field[0], 0)} × ${show(project.head.field[1], 0)} mm`,
      mark: 'good',
    },
    reach: reachWords(),
    heights: plan
      ? plan.layers.length === 0
        ? { words: 'No layers', mark: 'open' }
        : {
            words: `${plan.layers.length} layer${plan.layers.length === 1 ? '' : 's'}` + unreachedWords(),
            mark: unreachedWords() ? 'look' : 'good',
          }
      : { words: hasCircuit(project) ? 'Not planned yet' : 'Nothing yet', mark: 'open' },
    files: filesWords(),
  };

  function reachWords(): StepWords {
    if (!copper || !reach || copper.area.length === 0)
      return { words: drawn.length ? 'Not looked yet' : 'Nothing yet', mark: 'open' };
    const { counts, steep } = overview(copper, s.setup, reach, plan);
    const steepest = show(steep, 0);
    const bad = REASONS.filter((r) => r !== 'focus' && counts[r].elements.length > 0);
    if (bad.length === 0) return { words: `All reached, steepest ${steepest}°`, mark: 'good' };
    const told = bad.map(
      (r) => `${counts[r].elements.length} ${REASON_WORDS[r][counts[r].elements.length === 1 ? 0 : 1]}`,
    );
    return { words: `${told.join(', ')}; steepest ${steepest}°`, mark: 'look' };
  }

  function unreachedWords(): string {
    if (!copper || !plan) return '';
    const area = overview(copper, s.setup, reach, plan).lost;
    return area > 1e-6 ? `, ${show(area, 2)} mm² left out` : '';
  }

  function filesWords(): StepWords {
    const e = s.exported;
    if (!e) return { words: 'Not written yet', mark: 'open' };
    if (e.revision !== s.revision) return { words: 'Changed since they were written', mark: 'look' };
    const proof = e.report.proof;
    return e.report.ok
      ? { words: `${e.files} files written, proof holds`, mark: 'good' }
      : {
          words: `${e.files} files written; ${proof && !proof.ok ? 'the proof fails' : 'a check fails'}`,
          mark: 'look',
        };
  }
}

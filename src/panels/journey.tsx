/** The six steps of the job in order, each with its state in words; the chosen one shows its controls. */
import type { ReactNode } from 'react';
import { STEPS, type StepName } from '../store/state.ts';
import { type StepWords, stepWords } from '../store/words.ts';
import { CircuitStep } from './step-circuit.tsx';
import { FilesStep } from './step-files.tsx';
import { HeadStep } from './step-head.tsx';
import { HeightsStep } from './step-heights.tsx';
import { PartStep } from './step-part.tsx';
import { ReachStep } from './step-reach.tsx';
import { useSteady, useWindow } from './window.tsx';

const NAMES: Record<StepName, string> = {
  part: 'Part',
  circuit: 'Circuit',
  head: 'Head',
  reach: 'Reach',
  heights: 'Heights',
  files: 'Files',
};
const BODIES: Record<StepName, () => ReactNode> = {
  part: PartStep,
  circuit: CircuitStep,
  head: HeadStep,
  reach: ReachStep,
  heights: HeightsStep,
  files: FilesStep,
};
const MARKS: Record<StepWords['mark'], string> = { open: 'not begun', good: 'good', look: 'wants a look' };

export function Journey() {
  const { store } = useWindow();
  const state = useSteady();
  const words = stepWords(state);
  return (
    <nav className="journey" aria-label="Steps of the job">
      <ol>
        {STEPS.map((step) => {
          const open = state.step === step;
          const Body = BODIES[step];
          const { words: told, mark } = words[step];
          return (
            <li key={step} className={open ? 'open' : ''}>
              <h2>
                <button
                  type="button"
                  className="step"
                  aria-expanded={open}
                  aria-controls={`step-${step}`}
                  data-step={step}
                  onClick={() => store.setStep(step)}
                >
                  <Mark mark={mark} />
                  <span className="step-name">{NAMES[step]}</span>
                  <span className="step-words">{told}</span>
                </button>
              </h2>
              {open && (
                <div className="step-body" id={`step-${step}`}>
                  <Body />
                </div>
              )}
            </li>
          );
        })}
      </ol>
    </nav>
  );
}

function Mark({ mark }: { mark: StepWords['mark'] }) {
  return (
    <svg
      className={`mark mark-${mark}`}
      width="16"
      height="16"
      viewBox="0 0 16 16"
      role="img"
      aria-label={MARKS[mark]}
    >
      <circle cx="8" cy="8" r="6.5" />
      {mark === 'good' && <path d="M4.8 8.3 L7.2 10.6 L11.3 5.8" />}
      {mark === 'look' && <path d="M8 4.2 V9 M8 11.4 V11.6" />}
    </svg>
  );
}

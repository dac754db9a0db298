/** How far the work is, on stderr: a bar on a terminal, plain lines otherwise, JSON for a program that listens. */
import type { Phase } from '../core/base/run-context.ts';
import type { ProgressMode } from './args.ts';

export interface Progress {
  step(phase: Phase, done: number, of: number): void;
  /** Clears the bar, or says the last phase done. */
  end(): void;
}

const WORDS: Record<Phase, string> = {
  load: 'Reading the part',
  drape: 'Laying the copper',
  reach: 'Checking what the beam reaches',
  layers: 'Planning focus layers',
  scan: 'Drawing scan lines',
  files: 'Writing files',
  proof: 'Burning the files on the model',
};
const WIDTH = 24;

export function progressTo(
  out: { write(text: string): unknown; columns?: number },
  mode: ProgressMode,
): Progress {
  let current: Phase | null = null;
  let quarter = -1;
  const share = (done: number, of: number): number => (of > 0 ? Math.max(0, Math.min(1, done / of)) : 1);
  if (mode === 'none') return { step: () => {}, end: () => {} };
  if (mode === 'json')
    return {
      step: (phase, done, of) => void out.write(`${JSON.stringify({ phase, done, of })}\n`),
      end: () => {},
    };
  if (mode === 'lines')
    return {
      step: (phase, done, of) => {
        const q = Math.floor(4 * share(done, of));
        if (phase === current && q <= quarter) return;
        if (phase !== current) out.write(`${WORDS[phase]} …\n`);
        else if (q < 4) out.write(`${WORDS[phase]}: ${25 * q} %\n`);
        current = phase;
        quarter = q;
      },
      end: () => {},
    };
  return {
    step: (phase, done, of) => {
      const s = share(done, of);
      const full = Math.round(WIDTH * s);
      const text = `${'█'.repeat(full)}${'░'.repeat(WIDTH - full)} ${String(Math.floor(100 * s)).padStart(3)} %  ${WORDS[phase]}`;
      out.write(`\r\u001b[K${text.slice(0, Math.max(20, (out.columns ?? 80) - 1))}`);
      current = phase;
    },
    end: () => {
      if (current) out.write('\r\u001b[K');
      current = null;
    },
  };
}

/** Pulses along the moves of a scan file: where each one is commanded, and with what share of the power. */
import { Fault, InputError } from '../base/news.ts';
import type { BurnPath } from './burn-path.ts';

export interface Pulses {
  /** Field commands, mm, 2 a pulse. */
  command: Float64Array;
  /** Share of the average power. */
  share: Float32Array;
  /** Commands outside the field, which the head cannot follow: left out of the two above. */
  outside: number;
}

/** A layer with more pulses than this (half an hour of burning at 30 kHz) has a speed that nobody meant. */
const MOST_PULSES = 50_000_000;
/** Share of a pulse period: a pulse due at a move's last point is not lost to rounding. */
const PHASE_SLACK = 1e-9;
/** mm: coordinates stand in the file with four decimals, so a command on the field's edge may lie this far outside. */
const EDGE_SLACK = 1e-3;

/**
 * The source fires at its repetition rate while the beam is on: first at the start of a chain of burning moves, then
 * period after period, the phase carried over the corners. A jump ends the chain.
 *
 * @param rate   pulses a second
 * @param field  full widths of the usable field, mm
 * @throws InputError `too-many-pulses`
 */
export function layPulses(path: BurnPath, rate: number, field: readonly [number, number]): Pulses {
  const most = countPulses(path, rate);
  if (most > MOST_PULSES)
    throw new InputError({
      code: 'too-many-pulses',
      file: path.file,
      place: '',
      problem: `its moves hold ${most.toPrecision(2)} pulses`,
      mend: 'check the speeds in it',
    });
  const command = new Float64Array(2 * most);
  const share = new Float32Array(most);
  const [ex, ey] = [field[0] / 2 + EDGE_SLACK, field[1] / 2 + EDGE_SLACK];
  let [n, outside] = [0, 0];
  eachPulse(path, rate, (x, y, power) => {
    if (!(Math.abs(x) <= ex && Math.abs(y) <= ey)) outside++;
    else {
      if (n >= most) throw new Fault('more pulses than were counted');
      command[2 * n] = x;
      command[2 * n + 1] = y;
      share[n++] = power;
    }
  });
  return { command: command.slice(0, 2 * n), share: share.slice(0, n), outside };
}

/** An upper bound: every burning move may begin with a pulse of its own. */
function countPulses(path: BurnPath, rate: number): number {
  let most = 0;
  for (let i = 1; i < path.x.length; i++)
    if (path.mark[i])
      most +=
        Math.floor(
          (Math.hypot(path.x[i] - path.x[i - 1], path.y[i] - path.y[i - 1]) / path.speed[i]) * rate,
        ) + 2;
  return most;
}

function eachPulse(path: BurnPath, rate: number, emit: (x: number, y: number, share: number) => void): void {
  let due = 0; // periods until the next pulse
  for (let i = 1; i < path.x.length; i++) {
    if (!path.mark[i]) {
      due = 0;
      continue;
    }
    const dx = path.x[i] - path.x[i - 1];
    const dy = path.y[i] - path.y[i - 1];
    const periods = (Math.hypot(dx, dy) / path.speed[i]) * rate;
    for (; due <= periods + PHASE_SLACK; due++) {
      const t = periods > 0 ? Math.min(1, due / periods) : 0;
      emit(path.x[i - 1] + t * dx, path.y[i - 1] + t * dy, path.power[i]);
    }
    due = Math.max(0, due - periods);
  }
}

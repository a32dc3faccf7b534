import { requireSample } from '../stats/require-sample';
import { requireRate } from './derivative';

export interface PauseRule {
  /** A pause begins below this speed [m/s]. */
  readonly beginsBelowMps: number;
  /** And ends at or above this one [m/s]. */
  readonly endsAtMps: number;
  /** Shorter rests are not counted [s]. */
  readonly leastS: number;
}

/** Common practice; the speed is smoothed below tremor. */
export const PAUSE_RULE: PauseRule = { beginsBelowMps: 0.015, endsAtMps: 0.02, leastS: 0.2 };

/** An interval of samples. */
export interface Stretch {
  /** First sample in the state. */
  readonly start: number;
  /** First sample out of it. */
  readonly end: number;
}

/** Finds rests as speed comes in; the same for any chunking. */
export interface PauseTimer {
  push(speedMps: number): void;
  /** Ends a stretch (a gap, the end): a rest that was long enough counts up to here. */
  endStretch(): void;
  readonly count: number;
  readonly totalS: number;
}

/**
 * Rests of the hand while speed comes in.
 *
 * @param fs      sampling rate [Hz]
 * @param rule    when a rest begins, ends and counts
 * @param onPause takes each rest that counts, as sample numbers from the first push
 * @throws NumericError BAD_REQUEST for a rate that is not positive
 */
export function pauseTimer(fs: number, rule: PauseRule = PAUSE_RULE, onPause?: (pause: Stretch) => void): PauseTimer {
  requireRate(fs);
  let index = 0;
  let start = -1;
  let count = 0;
  let samples = 0;
  const close = (): void => {
    // Half a sample of slack, so that 0.2 s at 99.9 Hz is not lost to rounding.
    if (start >= 0 && index - start >= rule.leastS * fs - 0.5) {
      count += 1;
      samples += index - start;
      onPause?.({ start, end: index });
    }
    start = -1;
  };
  return {
    push(speed) {
      if (start < 0 && speed < rule.beginsBelowMps) start = index;
      else if (start >= 0 && speed >= rule.endsAtMps) close();
      index += 1;
    },
    endStretch: close,
    get count() {
      return count;
    },
    get totalS() {
      return samples / fs;
    },
  };
}

/**
 * Rests of the hand: stretches in which it all but stands still.
 *
 * @param speed m/s, smoothed below tremor
 * @param fs    sampling rate [Hz]
 * @throws NumericError TOO_SHORT for an empty profile, BAD_REQUEST for a rate that is not positive
 */
export function pauses(speed: ArrayLike<number>, fs: number, rule: PauseRule = PAUSE_RULE): Stretch[] {
  requireSample(speed, 1, 'speed');
  const found: Stretch[] = [];
  const timer = pauseTimer(fs, rule, (pause) => found.push(pause));
  for (let i = 0; i < speed.length; i++) timer.push(speed[i] as number);
  timer.endStretch();
  return found;
}

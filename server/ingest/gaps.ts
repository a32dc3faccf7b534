/** Where samples are missing: the device says so by its sample index, or a step in time does. */
import { gapPeriods, type Gap } from '@shared/recording';
import type { ReceivedBatch } from './received-batch';

export interface BeforeBatch {
  /** Time of the last sample, µs; below 0 before the first. */
  readonly lastUs: number;
  /** Device's sample index that was expected. */
  readonly nextSample: number;
  readonly rateHz: number;
}

/**
 * Gaps in front of and inside a batch.
 *
 * @returns what is missing by the device's index where the index skips, else by the length of the step; samples lost
 *   before the first one that came are a gap from the run's start
 */
export function listGaps({ first, timesUs }: ReceivedBatch, { lastUs, nextSample, rateHz }: BeforeBatch): Gap[] {
  const periodUs = 1e6 / rateHz;
  const gaps: Gap[] = [];
  const skipped = first - nextSample;
  let before = lastUs;
  for (let i = 0; i < timesUs.length; i += 1) {
    const at = timesUs[i] as number;
    const lost = i === 0 ? skipped : 0;
    if (lost > 0 || (before >= 0 && at - before > gapPeriods * periodUs)) {
      gaps.push({ startS: Math.max(0, before) / 1e6, endS: at / 1e6, missing: lost > 0 ? lost : Math.max(1, Math.round((at - before) / periodUs) - 1) });
    }
    before = at;
  }
  return gaps;
}

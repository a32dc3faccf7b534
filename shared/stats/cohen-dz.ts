import { meanAndDeviation } from './mean-and-deviation';
import { noncentralityInterval } from './noncentral-t';
import { pairedTTest } from './paired-t-test';

export interface StandardisedDifference {
  readonly value: number;
  /** Interval at the confidence asked for. */
  readonly interval: [number, number];
}

/**
 * Cohen's d_z of paired values with its interval from the non-central t distribution.
 *
 * @param confidence share, 0.95 by default
 * @throws NumericError as `pairedTTest`
 * @source Cohen 1988 (d_z); Steiger and Fouladi 1997 (interval)
 */
export function cohenDz(a: ArrayLike<number>, b: ArrayLike<number>, confidence = 0.95): StandardisedDifference {
  const { t, df, cohenDz: value } = pairedTTest(a, b);
  const [low, high] = noncentralityInterval(t, df, confidence);
  const root = Math.sqrt(df + 1);
  return { value, interval: [low / root, high / root] };
}

/**
 * Mean of the pairs' differences over the spread between participants, d_av: comparable with studies of separate groups.
 *
 * @throws NumericError as `pairedTTest`
 * @source Cumming 2012
 */
export function cohenDav(a: ArrayLike<number>, b: ArrayLike<number>): number {
  const { meanDiff } = pairedTTest(a, b);
  return meanDiff / ((meanAndDeviation(a).sd + meanAndDeviation(b).sd) / 2);
}

import { NumericError } from '../rig/numeric-error';
import type { StandardisedDifference } from './cohen-dz';
import { logGamma } from './log-gamma';
import { meanAndDeviation } from './mean-and-deviation';
import { noncentralityInterval } from './noncentral-t';
import { requireSample } from './require-sample';

/**
 * Hedges' g of two separate groups, of equal or unequal size: mean difference over the pooled deviation, without the small
 * sample's bias.
 *
 * @param a, b values of the two groups, two or more each
 * @param confidence share, 0.95 by default
 * @throws NumericError TOO_SHORT below two values a group, UNDEFINED when neither group has any spread
 * @source Hedges 1981 (exact correction by gamma functions); Steiger and Fouladi 1997 (interval)
 */
export function hedgesG(a: ArrayLike<number>, b: ArrayLike<number>, confidence = 0.95): StandardisedDifference {
  requireSample(a, 2, 'a');
  requireSample(b, 2, 'b');
  const first = meanAndDeviation(a);
  const second = meanAndDeviation(b);
  if (first.constant && second.constant) {
    throw new NumericError('UNDEFINED', 'Neither group has any spread to measure the difference by.');
  }
  const df = first.n + second.n - 2;
  const pooled = Math.sqrt(((first.n - 1) * first.sd ** 2 + (second.n - 1) * second.sd ** 2) / df);
  const d = (first.mean - second.mean) / pooled;
  const root = Math.sqrt((first.n * second.n) / (first.n + second.n));
  const correction = Math.exp(logGamma(df / 2) - 0.5 * Math.log(df / 2) - logGamma((df - 1) / 2));
  const [low, high] = noncentralityInterval(d * root, df, confidence);
  return { value: d * correction, interval: [(low / root) * correction, (high / root) * correction] };
}

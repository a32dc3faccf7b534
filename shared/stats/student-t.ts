import { incompleteBeta } from './incomplete-beta';
import { logBeta } from './log-gamma';
import { normalQuantile } from './normal-distribution';

/**
 * Probability that Student's t is at least |t| away from 0, kept exact in the tails.
 *
 * @param degrees degrees of freedom, above 0
 * @source Student 1908; as incomplete beta, Abramowitz and Stegun 26.5.27
 * @example studentTwoSided(4.0621, 9) // 0.002833
 */
export function studentTwoSided(t: number, degrees: number): number {
  const square = t * t;
  if (square === Infinity) return 0;
  return incompleteBeta(degrees / 2, 0.5, degrees / (degrees + square), square / (degrees + square));
}

/**
 * The t that a value of Student's distribution exceeds in size with the given two-sided probability.
 *
 * @param twoSided above 0, at most 1: 0.05 for a 95 % interval
 * @source inverse of `studentTwoSided` by Newton steps inside a bracket
 * @example studentCritical(0.05, 4) // 2.7764451051977934
 */
export function studentCritical(twoSided: number, degrees: number): number {
  if (twoSided >= 1) return 0;
  let low = 0;
  let high = 1;
  while (studentTwoSided(high, degrees) > twoSided) {
    low = high;
    high *= 2;
  }
  const logNorm = -0.5 * Math.log(degrees) - logBeta(degrees / 2, 0.5);
  let t = Math.min(high, Math.max(low, -normalQuantile(twoSided / 2)));
  for (let step = 0; step < 300; step++) {
    const excess = studentTwoSided(t, degrees) - twoSided;
    if (excess > 0) low = t;
    else high = t;
    const density = Math.exp(logNorm - ((degrees + 1) / 2) * Math.log1p((t * t) / degrees));
    let next = t + excess / (2 * density);
    if (!(next > low && next < high)) next = (low + high) / 2;
    if (Math.abs(next - t) <= 4 * Number.EPSILON * t) return next;
    t = next;
  }
  return t;
}

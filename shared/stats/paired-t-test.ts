import { NumericError } from '../rig/numeric-error';
import { meanAndDeviation } from './mean-and-deviation';
import { requirePairs } from './require-sample';
import { studentCritical, studentTwoSided } from './student-t';

export interface PairedTTest {
  readonly t: number;
  readonly df: number;
  /** Two-sided. */
  readonly p: number;
  /** Mean of a - b, in the unit of the data. */
  readonly meanDiff: number;
  readonly sdDiff: number;
  /** Standardised mean difference of the pairs, meanDiff / sdDiff. */
  readonly cohenDz: number;
  /** Interval of the mean difference, 95 %. */
  readonly ci95: [number, number];
}

/**
 * Paired t test: do the two values of a pair differ on average?
 *
 * Assumes that the differences are roughly normal or many; their number is the number of participants, not of trials.
 *
 * @param a, b values of the same participants in the same order
 * @throws NumericError BAD_REQUEST for lists of different length, TOO_SHORT below two pairs, UNDEFINED when all differences are equal
 * @source Student 1908; effect size d_z of Cohen 1988
 * @example R's `sleep` data: t -4.0621, df 9, p 0.002833
 */
export function pairedTTest(a: ArrayLike<number>, b: ArrayLike<number>): PairedTTest {
  requirePairs(a, b, 2, ['a', 'b']);
  const differences = Float64Array.from(a, (value, i) => value - (b[i] as number));
  const { n, mean, sd, constant } = meanAndDeviation(differences);
  if (constant || sd <= 4 * Number.EPSILON * largest(a, b)) {
    throw new NumericError('UNDEFINED', 'Every pair differs by the same amount, so there is no spread to compare the mean with.');
  }
  const df = n - 1;
  const standardError = sd / Math.sqrt(n);
  const t = mean / standardError;
  const reach = studentCritical(0.05, df) * standardError;
  return {
    t,
    df,
    p: studentTwoSided(t, df),
    meanDiff: mean,
    sdDiff: sd,
    cohenDz: mean / sd,
    ci95: [mean - reach, mean + reach],
  };
}

function largest(a: ArrayLike<number>, b: ArrayLike<number>): number {
  let size = 0;
  for (let i = 0; i < a.length; i++) size = Math.max(size, Math.abs(a[i] as number), Math.abs(b[i] as number));
  return size;
}

import { meanAndDeviation } from './mean-and-deviation';
import { requirePairs } from './require-sample';
import { studentCritical } from './student-t';

export interface BlandAltman {
  /** Mean of a - b, in the unit of the data. */
  readonly bias: number;
  readonly sd: number;
  readonly lower: number;
  readonly upper: number;
  /** Interval of the bias, 95 %. */
  readonly biasCi95: [number, number];
  /** Intervals of the two limits, 95 %, approximate: wide for few pairs. */
  readonly lowerCi95: [number, number];
  readonly upperCi95: [number, number];
}

/**
 * Limits of agreement of two methods or observers: bias plus and minus 1.96 deviations of the differences.
 *
 * @param a, b values of the same things in the same order
 * @throws NumericError BAD_REQUEST for lists of different length, TOO_SHORT below two pairs
 * @source Bland and Altman 1986; variance of a limit Bland and Altman 1999
 */
export function blandAltman(a: ArrayLike<number>, b: ArrayLike<number>): BlandAltman {
  requirePairs(a, b, 2, ['a', 'b']);
  const { n, mean, sd } = meanAndDeviation(Float64Array.from(a, (value, i) => value - (b[i] as number)));
  const lower = mean - 1.96 * sd;
  const upper = mean + 1.96 * sd;
  const critical = studentCritical(0.05, n - 1);
  const biasReach = (critical * sd) / Math.sqrt(n);
  const limitReach = critical * sd * Math.sqrt(1 / n + 1.96 ** 2 / (2 * (n - 1)));
  return {
    bias: mean,
    sd,
    lower,
    upper,
    biasCi95: [mean - biasReach, mean + biasReach],
    lowerCi95: [lower - limitReach, lower + limitReach],
    upperCi95: [upper - limitReach, upper + limitReach],
  };
}

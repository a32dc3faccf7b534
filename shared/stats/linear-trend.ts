import { NumericError } from '../rig/numeric-error';
import { meanAndDeviation } from './mean-and-deviation';
import { requirePairs } from './require-sample';
import { studentCritical, studentTwoSided } from './student-t';

export interface LinearTrend {
  readonly n: number;
  /** Unit of y over unit of x. */
  readonly slope: number;
  readonly slopeCi95: [number, number];
  /** Of the slope against zero, two-sided; 0 when the points lie on a line exactly. */
  readonly p: number;
  /** Fitted y at x = 0; far from the data it says little: use `at`. */
  readonly intercept: number;
  /** Share of y's variation that the line explains. */
  readonly r2: number;
  /** Deviation of the points from the line, divisor n - 2. */
  readonly residualSd: number;
  /** Fitted y at an x, computed about the middle of the data. */
  at(x: number): number;
}

/**
 * Straight line through points by least squares, with the interval of its slope.
 *
 * Works about the mean of x, so that times since an epoch do not lose the answer.
 *
 * @param x, y three points or more
 * @throws NumericError BAD_REQUEST for lists of different length, TOO_SHORT below three points, UNDEFINED when all x or all y are equal
 * @source ordinary least squares, e.g. Draper and Smith 1998
 */
export function linearTrend(x: ArrayLike<number>, y: ArrayLike<number>): LinearTrend {
  requirePairs(x, y, 3, ['x', 'y']);
  const acrossX = meanAndDeviation(x);
  const acrossY = meanAndDeviation(y);
  if (acrossX.constant) throw new NumericError('UNDEFINED', 'All points share one x, so no slope can be drawn through them.');
  if (acrossY.constant) throw new NumericError('UNDEFINED', 'All points share one y: the line is level and there is no spread to judge it by.');
  const { n } = acrossX;
  const originX = x[0] as number;
  const originY = y[0] as number;
  const meanX = acrossX.mean - originX;
  const meanY = acrossY.mean - originY;
  let crossed = 0;
  let squaresX = 0;
  for (let i = 0; i < n; i++) {
    const dx = (x[i] as number) - originX - meanX;
    crossed += dx * ((y[i] as number) - originY - meanY);
    squaresX += dx * dx;
  }
  const slope = crossed / squaresX;
  let residual = 0;
  for (let i = 0; i < n; i++) {
    const away = (y[i] as number) - originY - meanY - slope * ((x[i] as number) - originX - meanX);
    residual += away * away;
  }
  const total = acrossY.sd ** 2 * (n - 1);
  const residualSd = Math.sqrt(residual / (n - 2));
  const standardError = residualSd / Math.sqrt(squaresX);
  const reach = studentCritical(0.05, n - 2) * standardError;
  const at = (where: number): number => acrossY.mean + slope * (where - originX - meanX);
  return {
    n,
    slope,
    slopeCi95: [slope - reach, slope + reach],
    p: standardError > 0 ? studentTwoSided(slope / standardError, n - 2) : 0,
    intercept: at(0),
    r2: Math.max(0, 1 - residual / total),
    residualSd,
    at,
  };
}

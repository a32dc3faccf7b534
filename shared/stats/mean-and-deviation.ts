import { requireSample } from './require-sample';

export interface MeanAndDeviation {
  readonly n: number;
  readonly mean: number;
  /** Sample standard deviation, divisor n - 1; 0 when n is 1. */
  readonly sd: number;
  /** True when the values differ by no more than the rounding of doubles: the deviation is then noise, not data. */
  readonly constant: boolean;
}

/**
 * Mean and sample standard deviation in two passes about the first value, so that a large common offset (times since an
 * epoch, encoder counts) does not eat the digits of the spread.
 *
 * @param values one number or more
 * @throws NumericError TOO_SHORT for an empty list, BAD_REQUEST for a value that is not finite
 * @source Chan, Golub and LeVeque 1983 (two-pass with the correction term)
 * @example meanAndDeviation([2, 4, 4, 4, 5, 5, 7, 9]) // mean 5, sd 2.138...
 */
export function meanAndDeviation(values: ArrayLike<number>): MeanAndDeviation {
  requireSample(values, 1, 'The sample');
  const n = values.length;
  const origin = values[0] as number;
  let sum = 0;
  let largest = 0;
  for (let i = 0; i < n; i++) {
    const value = values[i] as number;
    sum += value - origin;
    largest = Math.max(largest, Math.abs(value));
  }
  const shift = sum / n;
  let squares = 0;
  let leftOver = 0;
  for (let i = 0; i < n; i++) {
    const deviation = (values[i] as number) - origin - shift;
    squares += deviation * deviation;
    leftOver += deviation;
  }
  const sd = n > 1 ? Math.sqrt(Math.max(0, squares - (leftOver * leftOver) / n) / (n - 1)) : 0;
  return { n, mean: origin + shift, sd, constant: sd <= 8 * Number.EPSILON * largest };
}

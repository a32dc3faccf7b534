import { NumericError } from '../rig/numeric-error';
import { requireSample } from '../stats/require-sample';

/**
 * Rate of change of evenly spaced samples: central differences, one-sided of second order at both ends.
 *
 * Exact for parabolas. Differences amplify noise with the sampling rate: filter first.
 *
 * @param x  samples, three or more
 * @param fs sampling rate [Hz]
 * @returns a new array, unit of x per second
 * @throws NumericError TOO_SHORT below three samples, BAD_REQUEST for a rate that is not positive
 * @source Abramowitz and Stegun 25.3.21 and 25.3.20
 */
export function derivative(x: ArrayLike<number>, fs: number): Float64Array {
  requireSample(x, 3, 'x');
  requireRate(fs);
  const n = x.length;
  const rate = new Float64Array(n);
  for (let i = 1; i < n - 1; i++) rate[i] = (((x[i + 1] as number) - (x[i - 1] as number)) * fs) / 2;
  rate[0] = ((-3 * (x[0] as number) + 4 * (x[1] as number) - (x[2] as number)) * fs) / 2;
  rate[n - 1] = ((3 * (x[n - 1] as number) - 4 * (x[n - 2] as number) + (x[n - 3] as number)) * fs) / 2;
  return rate;
}

/** @throws NumericError BAD_REQUEST unless the sampling rate is a positive, finite number of hertz */
export function requireRate(fs: number): void {
  if (!(fs > 0 && Number.isFinite(fs))) throw new NumericError('BAD_REQUEST', 'The sampling rate must be a positive number of hertz.');
}

import { NumericError } from '../rig/numeric-error';
import { requireSample } from '../stats/require-sample';
import { derivative } from './derivative';

/**
 * Speed along a path from its three coordinates.
 *
 * @param x, y, z evenly spaced, filtered positions [m]
 * @param fs      sampling rate [Hz]
 * @returns m/s, one value a sample
 * @throws NumericError TOO_SHORT below three samples, BAD_REQUEST for columns of different length
 */
export function speedProfile(x: ArrayLike<number>, y: ArrayLike<number>, z: ArrayLike<number>, fs: number): Float64Array {
  if (x.length !== y.length || x.length !== z.length) {
    throw new NumericError('BAD_REQUEST', 'The three coordinates must have the same number of samples.');
  }
  const rates = [x, y, z].map((column) => derivative(column, fs));
  return Float64Array.from(x, (_, i) => Math.hypot(...rates.map((rate) => rate[i] as number)));
}

/** Greatest value of a speed profile, its unit kept. @throws NumericError TOO_SHORT for an empty one */
export function peakSpeed(speed: ArrayLike<number>): number {
  requireSample(speed, 1, 'speed');
  let peak = -Infinity;
  for (let i = 0; i < speed.length; i++) peak = Math.max(peak, speed[i] as number);
  return peak;
}

/** Mean of a speed profile over time, by trapezoids; its unit kept. @throws NumericError TOO_SHORT below two samples */
export function meanSpeed(speed: ArrayLike<number>): number {
  requireSample(speed, 2, 'speed');
  let sum = ((speed[0] as number) + (speed[speed.length - 1] as number)) / 2;
  for (let i = 1; i < speed.length - 1; i++) sum += speed[i] as number;
  return sum / (speed.length - 1);
}

import { NumericError } from '../rig/numeric-error';
import { requireSample } from '../stats/require-sample';
import { requireRate } from './derivative';
import { peakSpeed } from './speed-profile';

/**
 * Log dimensionless jerk of a speed profile: -5.32 (that is -ln 204.8) for a minimum-jerk reach, lower is rougher.
 *
 * -ln( T^3 / peak^2 * integral of jerk squared ), jerk as second difference of speed, T = (N - 1) / fs.
 *
 * @param speed one movement, evenly sampled and filtered; any unit
 * @param fs    sampling rate [Hz]
 * @throws NumericError TOO_SHORT below three samples, UNDEFINED when nothing moved or speed changed evenly throughout
 * @source Hogan and Sternad 2009; logarithm Balasubramanian and others 2012
 */
export function logDimensionlessJerk(speed: ArrayLike<number>, fs: number): number {
  requireSample(speed, 3, 'speed');
  requireRate(fs);
  const peak = peakSpeed(speed);
  if (peak <= 0) throw new NumericError('UNDEFINED', 'Nothing moved, so jerk has no movement to be compared with.');
  const n = speed.length;
  let squares = 0;
  for (let i = 1; i < n - 1; i++) {
    const bend = (speed[i + 1] as number) - 2 * (speed[i] as number) + (speed[i - 1] as number);
    squares += bend * bend;
  }
  if (squares <= n * (4 * Number.EPSILON * peak) ** 2) {
    throw new NumericError('UNDEFINED', 'Speed changes evenly throughout: there is no jerk to take the logarithm of.');
  }
  const duration = (n - 1) / fs;
  return -Math.log(((duration ** 3 * fs ** 4) / fs / peak ** 2) * squares);
}

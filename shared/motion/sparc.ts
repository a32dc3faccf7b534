import { NumericError } from '../rig/numeric-error';
import { requireSample } from '../stats/require-sample';
import { requireRate } from './derivative';
import { powerTransform } from './fourier-transform';
import { peakSpeed } from './speed-profile';

const HIGHEST_HZ = 10;
const LEAST_SHARE = 0.05;
const PADDING = 4;

/**
 * Spectral arc length of a speed profile: 0 would be perfectly smooth, about -1.4 is one minimum-jerk reach, lower is rougher.
 *
 * The spectrum (zero-padded sixteenfold beyond the next power of two) is scaled by its largest bin, cut at 10 Hz and to the
 * span between the first and the last bin of at least 0.05; the arc is measured with that span as unit of frequency.
 *
 * @param speed one movement, evenly sampled; any unit
 * @param fs    sampling rate [Hz]
 * @throws NumericError TOO_SHORT below two samples, UNDEFINED for a signal that is zero throughout or fills a single bin
 * @source Balasubramanian, Melendez-Calderon, Roby-Brami and Burdet 2015
 */
export function sparc(speed: ArrayLike<number>, fs: number): number {
  requireSample(speed, 2, 'speed');
  requireRate(fs);
  if (peakSpeed(speed) <= 0) throw new NumericError('UNDEFINED', 'Nothing moved, so there is no spectrum to measure.');
  const size = 2 ** (Math.ceil(Math.log2(speed.length)) + PADDING);
  const transform = powerTransform(size);
  const padded = new Float64Array(size);
  padded.set(speed);
  const magnitude = new Float64Array(transform.bins);
  transform.power(padded, magnitude);
  let largest = 0;
  for (let k = 0; k < magnitude.length; k++) {
    magnitude[k] = Math.sqrt(magnitude[k] as number);
    largest = Math.max(largest, magnitude[k] as number);
  }
  const spacing = fs / size;
  let first = -1;
  let last = -1;
  for (let k = 0; k < magnitude.length && k * spacing <= HIGHEST_HZ; k++) {
    if ((magnitude[k] as number) / largest < LEAST_SHARE) continue;
    if (first < 0) first = k;
    last = k;
  }
  if (last <= first) throw new NumericError('UNDEFINED', 'The spectrum below 10 Hz fills a single bin and has no arc.');
  const unit = 1 / (last - first);
  let arc = 0;
  for (let k = first + 1; k <= last; k++) {
    const rise = ((magnitude[k] as number) - (magnitude[k - 1] as number)) / largest;
    arc += Math.sqrt(unit * unit + rise * rise);
  }
  return -arc;
}

import { NumericError } from '../rig/numeric-error';
import { requireSample } from '../stats/require-sample';
import { requireRate } from './derivative';
import { powerTransform } from './fourier-transform';

export interface Spectrum {
  /** Frequencies of the bins, from 0 [Hz]. */
  readonly f: Float64Array;
  /** One-sided power density, unit of the signal squared per Hz. */
  readonly psd: Float64Array;
}

/** Sums segment after segment; what a whole recording is measured with, at the memory of one segment. */
export interface SpectrumSum {
  readonly length: number;
  /** Takes one segment of `length` samples; its mean is removed, its ends are tapered. */
  add(segment: ArrayLike<number>): void;
  readonly segments: number;
  /** Mean over the segments taken so far. @throws NumericError TOO_SHORT when there was none */
  spectrum(): Spectrum;
}

/**
 * Power density by averaging tapered segments that overlap by half; samples at the end that fill no segment are left out.
 *
 * Hann window (periodic), the mean of each segment removed, one-sided.
 *
 * @param x       evenly spaced samples
 * @param fs      sampling rate [Hz]
 * @param nperseg samples of a segment, 2 or more: bins lie fs / nperseg apart
 * @throws NumericError TOO_SHORT when x does not fill one segment, BAD_REQUEST for a segment below 2 samples
 * @source Welch 1967
 */
export function welchSpectrum(x: ArrayLike<number>, fs: number, nperseg: number): Spectrum {
  requireSample(x, 1, 'x');
  // Before any table of that size is made.
  if (x.length < nperseg) {
    throw new NumericError('TOO_SHORT', `x holds ${x.length} samples and does not fill one segment of ${nperseg}.`);
  }
  const sum = spectrumSum(fs, nperseg);
  const samples = Float64Array.from(x);
  const step = nperseg - Math.floor(nperseg / 2);
  for (let start = 0; start + nperseg <= samples.length; start += step) sum.add(samples.subarray(start, start + nperseg));
  return sum.spectrum();
}

/** The accumulator behind `welchSpectrum`, for segments that come one by one. Parameters and errors as there. */
export function spectrumSum(fs: number, nperseg: number): SpectrumSum {
  requireRate(fs);
  if (!Number.isInteger(nperseg) || nperseg < 2) {
    throw new NumericError('BAD_REQUEST', 'A segment is a whole number of samples, 2 or more.');
  }
  const window = new Float64Array(nperseg);
  let windowPower = 0;
  for (let i = 0; i < nperseg; i++) {
    window[i] = 0.5 - 0.5 * Math.cos((2 * Math.PI * i) / nperseg);
    windowPower += (window[i] as number) ** 2;
  }
  const transform = powerTransform(nperseg);
  const tapered = new Float64Array(nperseg);
  const power = new Float64Array(transform.bins);
  const total = new Float64Array(transform.bins);
  let segments = 0;
  return {
    length: nperseg,
    get segments() {
      return segments;
    },
    add(segment) {
      let mean = 0;
      for (let i = 0; i < nperseg; i++) mean += segment[i] as number;
      mean /= nperseg;
      for (let i = 0; i < nperseg; i++) tapered[i] = ((segment[i] as number) - mean) * (window[i] as number);
      transform.power(tapered, power);
      for (let k = 0; k < power.length; k++) total[k] = (total[k] as number) + (power[k] as number);
      segments += 1;
    },
    spectrum() {
      if (segments === 0) throw new NumericError('TOO_SHORT', 'No stretch was long enough to fill one segment.');
      // One bin width, written as packages that list frequencies write it, so that a band's edges fall on the same bins.
      const spacing = 1 / (nperseg * (1 / fs));
      const f = Float64Array.from({ length: transform.bins }, (_, k) => k * spacing);
      const psd = total.map((sum, k) => {
        const mirrored = k > 0 && 2 * k !== nperseg;
        return ((mirrored ? 2 : 1) * sum) / (segments * fs * windowPower);
      });
      return { f, psd };
    },
  };
}

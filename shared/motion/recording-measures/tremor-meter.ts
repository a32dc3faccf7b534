import { bandPower, TREMOR_BAND_HZ } from '../band-power';
import { spectrumSum } from '../welch-spectrum';

/** Long enough for bins 0.4 Hz apart. */
const SEGMENT_S = 2.56;

/** Sums the spectra of the three coordinates while a path comes in. */
export interface TremorMeter {
  push(x: number, y: number, z: number): void;
  endStretch(): void;
  /** Root mean square excursion within the tremor band, all directions together [m]; null without a stretch of 2.56 s. */
  readonly rmsM: number | null;
}

/**
 * Size of physiological tremor by Welch spectra over unbroken stretches.
 *
 * @param rateHz  of the positions
 * @param blockOf how many raw samples each position is the mean of: that mean's own damping is taken out again
 * @source Welch 1967; the band is common practice
 */
export function tremorMeter(rateHz: number, blockOf: number): TremorMeter | null {
  if (rateHz <= 2.2 * TREMOR_BAND_HZ[1]) return null;
  const size = Math.round(SEGMENT_S * rateHz);
  const step = size - Math.floor(size / 2);
  const axes = [0, 1, 2].map(() => ({ sum: spectrumSum(rateHz, size), samples: new Float64Array(size) }));
  let filled = 0;
  return {
    push(x, y, z) {
      const position = [x, y, z];
      axes.forEach((axis, i) => (axis.samples[filled] = position[i] as number));
      filled += 1;
      if (filled < size) return;
      for (const { sum, samples } of axes) {
        sum.add(samples);
        samples.copyWithin(0, step);
      }
      filled = size - step;
    },
    endStretch() {
      filled = 0;
    },
    get rmsM() {
      if (axes.some(({ sum }) => sum.segments === 0)) return null;
      let power = 0;
      for (const { sum } of axes) {
        const { f, psd } = sum.spectrum();
        power += bandPower({ f, psd: psd.map((density, k) => density / blockGain(f[k] as number, rateHz, blockOf) ** 2) });
      }
      return Math.sqrt(power);
    },
  };
}

/** Gain of the mean over a block of raw samples at a frequency (Dirichlet's kernel). */
function blockGain(frequency: number, rateHz: number, blockOf: number): number {
  const angle = (Math.PI * frequency) / (rateHz * blockOf);
  return angle === 0 || blockOf === 1 ? 1 : Math.sin(blockOf * angle) / (blockOf * Math.sin(angle));
}

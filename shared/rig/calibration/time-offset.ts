import { requireSample } from '../../stats/require-sample';
import { NumericError } from '../numeric-error';

export type TimeOffset = {
  /** Whole samples by which b is later than a. */
  lagSamples: number;
  /** Pearson correlation of the overlap at that lag, -1 to 1. */
  peakCorrelation: number;
  /** s: lag with the top of a parabola through the peak and its neighbours; above zero when b is later than a. */
  offset: number;
  /** True when the peak is the last lag tried: the true one may lie beyond, and no parabola was laid through it. */
  atLimit: boolean;
};

/** Two samples always correlate fully. */
const FEWEST_IN_OVERLAP = 3;
/** Correlations closer than this are equal to rounding; the shorter lag is then taken. No unit. */
const TIE = 1e-12;
/** Share of a whole signal's deviation below which a stretch of it counts as constant. No unit. */
const STILL = 1e-10;

/**
 * Time by which one uniformly sampled signal lags another, by the peak of their cross-correlation.
 *
 * For every lag k in [-maxLag, maxLag] the Pearson correlation of a[i] with b[i + k] over what overlaps, so offsets
 * and units of the two signals do not matter. Lags at which one of the two stands still have no correlation and are passed over.
 *
 * @param a, b   signals with the same sampling, of any lengths
 * @param dt     s, above zero
 * @param maxLag samples, a whole number of zero or above
 * @throws NumericError BAD_REQUEST, TOO_SHORT when the overlap at the largest lag is below three samples, UNDEFINED when a
 *         signal is constant throughout
 * @source cross-correlation with a three-point parabola, common practice (e.g. Jacovitti and Scarano 1993, cited from memory)
 */
export function timeOffset(a: ArrayLike<number>, b: ArrayLike<number>, dt: number, maxLag: number): TimeOffset {
  requireSample(a, 0, 'a');
  requireSample(b, 0, 'b');
  if (!(dt > 0 && dt < Infinity)) throw new NumericError('BAD_REQUEST', 'dt needs to be a time above zero.');
  if (!(Number.isSafeInteger(maxLag) && maxLag >= 0)) throw new NumericError('BAD_REQUEST', 'maxLag needs to be a whole number of samples, zero or above.');
  if (Math.min(a.length, b.length) - maxLag < FEWEST_IN_OVERLAP) {
    throw new NumericError('TOO_SHORT', `Signals of ${a.length} and ${b.length} samples overlap too little at a lag of ${maxLag}. Take longer signals or a smaller maxLag.`);
  }
  const floors = [deviation(a), deviation(b)].map((whole) => STILL * whole) as [number, number];
  const correlations = Float64Array.from({ length: 2 * maxLag + 1 }, (_, i) => correlationAt(a, b, i - maxLag, floors));
  let best = Number.NaN;
  for (let distance = 0; distance <= maxLag; distance++) {
    for (const lag of distance === 0 ? [0] : [distance, -distance]) {
      const value = correlations[lag + maxLag]!;
      if (Number.isNaN(best) ? !Number.isNaN(value) : value > correlations[best + maxLag]! + TIE) best = lag;
    }
  }
  if (Number.isNaN(best)) throw new NumericError('UNDEFINED', 'A signal that does not change has no time offset to another.');
  const peak = correlations[best + maxLag]!;
  const shift = topOfParabola(correlations[best + maxLag - 1], peak, correlations[best + maxLag + 1]);
  return { lagSamples: best, peakCorrelation: peak, offset: (best + shift) * dt, atLimit: maxLag > 0 && Math.abs(best) === maxLag };
}

/** Where the parabola through three neighbours has its top, in samples from the middle one; 0 without two neighbours. */
function topOfParabola(before: number | undefined, peak: number, after: number | undefined): number {
  if (before === undefined || after === undefined || Number.isNaN(before + after)) return 0;
  const bend = before - 2 * peak + after;
  return bend < 0 ? Math.min(0.5, Math.max(-0.5, (0.5 * (before - after)) / bend)) : 0;
}

/** Pearson correlation of a[i] with b[i + lag]; NaN, for this file only, where one of them stands still. */
function correlationAt(a: ArrayLike<number>, b: ArrayLike<number>, lag: number, floors: readonly [number, number]): number {
  const first = Math.max(0, -lag);
  const last = Math.min(a.length, b.length - lag);
  const count = last - first;
  const aMean = meanOf(a, first, last);
  const bMean = meanOf(b, first + lag, last + lag);
  let aa = 0, bb = 0, ab = 0;
  for (let i = first; i < last; i++) {
    const x = a[i]! - aMean;
    const y = b[i + lag]! - bMean;
    aa += x * x;
    bb += y * y;
    ab += x * y;
  }
  if (!(Math.sqrt(aa / count) > floors[0] && Math.sqrt(bb / count) > floors[1])) return Number.NaN;
  return Math.min(1, Math.max(-1, ab / Math.sqrt(aa * bb)));
}

function meanOf(values: ArrayLike<number>, first: number, last: number): number {
  const origin = values[first]!;
  let sum = 0;
  for (let i = first; i < last; i++) sum += values[i]! - origin;
  return origin + sum / (last - first);
}

/** Root mean squared deviation; 0 when it is no more than the rounding of the values. */
function deviation(values: ArrayLike<number>): number {
  const mean = meanOf(values, 0, values.length);
  let squares = 0;
  let largest = 0;
  for (let i = 0; i < values.length; i++) {
    squares += (values[i]! - mean) ** 2;
    largest = Math.max(largest, Math.abs(values[i]!));
  }
  const deviation = Math.sqrt(squares / values.length);
  return deviation > 8 * Number.EPSILON * largest ? deviation : Infinity;
}

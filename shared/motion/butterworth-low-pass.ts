import { NumericError } from '../rig/numeric-error';

const HIGHEST_ORDER = 12;

/** One factor of a filter, of first or second order, with gain 1 at standstill: y = b/a x in powers of the delay. */
export interface FilterSection {
  readonly b0: number;
  readonly b1: number;
  readonly b2: number;
  readonly a1: number;
  readonly a2: number;
}

export interface LowPass {
  readonly order: number;
  /** Corner frequency, where the gain is 1/sqrt 2 [Hz]. */
  readonly fc: number;
  /** Sampling rate [Hz]. */
  readonly fs: number;
  /** Coefficients in rising powers of the delay, a[0] = 1. */
  readonly b: number[];
  readonly a: number[];
  /** The same filter as a product of small ones: what is run, because it keeps its digits at low corner frequencies. */
  readonly sections: readonly FilterSection[];
}

/**
 * Butterworth low-pass filter by the bilinear transform with the corner pre-warped.
 *
 * @param order 1 to 12
 * @param fc    corner [Hz], above 0 and below fs / 2
 * @param fs    sampling rate [Hz]
 * @throws NumericError BAD_REQUEST for an order or a corner out of range
 * @source Butterworth 1930; bilinear transform Tustin 1947
 * @example butterworthLowPass(2, 5, 100).b // [0.02008, 0.04017, 0.02008]
 */
export function butterworthLowPass(order: number, fc: number, fs: number): LowPass {
  if (!Number.isInteger(order) || order < 1 || order > HIGHEST_ORDER) {
    throw new NumericError('BAD_REQUEST', `The order of the filter is a whole number from 1 to ${HIGHEST_ORDER}.`);
  }
  if (!(fs > 0 && Number.isFinite(fs)) || !(fc > 0 && fc < fs / 2)) {
    throw new NumericError('BAD_REQUEST', 'The corner frequency must be above 0 and below half the sampling rate.');
  }
  const warped = Math.tan((Math.PI * fc) / fs);
  const sections: FilterSection[] = [];
  for (let k = 0; k < Math.floor(order / 2); k++) {
    // Analogue pole pair warped * (-damping +- i swing), mapped by z = (1 + p) / (1 - p).
    const angle = (Math.PI * (2 * k + 1)) / (2 * order);
    const damping = Math.sin(angle);
    const square = warped * warped;
    const scale = 1 + 2 * damping * warped + square;
    const b0 = square / scale;
    sections.push({ b0, b1: 2 * b0, b2: b0, a1: (2 * (square - 1)) / scale, a2: (1 - 2 * damping * warped + square) / scale });
  }
  if (order % 2 === 1) {
    const b0 = warped / (1 + warped);
    sections.push({ b0, b1: b0, b2: 0, a1: (warped - 1) / (warped + 1), a2: 0 });
  }
  let b = [1];
  let a = [1];
  for (const section of sections) {
    const long = section.b2 !== 0;
    b = multiply(b, long ? [section.b0, section.b1, section.b2] : [section.b0, section.b1]);
    a = multiply(a, long ? [1, section.a1, section.a2] : [1, section.a1]);
  }
  return { order, fc, fs, b, a, sections };
}

function multiply(p: readonly number[], q: readonly number[]): number[] {
  const product = new Array<number>(p.length + q.length - 1).fill(0);
  p.forEach((x, i) => q.forEach((y, j) => (product[i + j] = (product[i + j] as number) + x * y)));
  return product;
}

import { NumericError } from '../rig/numeric-error';
import { requireSample } from '../stats/require-sample';
import type { FilterSection, LowPass } from './butterworth-low-pass';

/**
 * Filters forward and backward, so that nothing is shifted in time; the gain is that of the filter squared.
 *
 * Both ends are continued by their own odd mirror image over 3 (order + 1) samples, and each pass starts settled on its
 * first value, so that a level signal comes out level. What was not measured must be cut out first, not filled with a guess.
 *
 * @param x samples at the filter's rate, more than 3 (order + 1)
 * @returns a new array of the same length and unit
 * @throws NumericError TOO_SHORT when x does not reach over the mirrored ends, BAD_REQUEST for values that are not finite
 * @source Gustafsson 1996 discusses the ends; odd continuation with settled start is the usual default of signal packages
 */
export function filterZeroPhase(filter: LowPass, x: ArrayLike<number>): Float64Array {
  requireSample(x, 1, 'x');
  const pad = 3 * (filter.order + 1);
  const n = x.length;
  if (n <= pad) {
    throw new NumericError('TOO_SHORT', `x holds ${n} samples; an order ${filter.order} filter needs more than ${pad}.`);
  }
  const extended = new Float64Array(n + 2 * pad);
  const first = x[0] as number;
  const last = x[n - 1] as number;
  for (let i = 0; i < pad; i++) {
    extended[i] = 2 * first - (x[pad - i] as number);
    extended[pad + n + i] = 2 * last - (x[n - 2 - i] as number);
  }
  extended.set(x, pad);
  for (const section of filter.sections) runSettled(section, extended);
  extended.reverse();
  for (const section of filter.sections) runSettled(section, extended);
  extended.reverse();
  return extended.slice(pad, pad + n);
}

/** One pass in place, the two delays set as if the first value had stood for ever. */
function runSettled(section: FilterSection, x: Float64Array): void {
  const { b0, b1, b2, a1, a2 } = section;
  const start = x[0] as number;
  let second = (b2 - a2) * start;
  let first = (b1 - a1) * start + second;
  for (let i = 0; i < x.length; i++) {
    const input = x[i] as number;
    const output = b0 * input + first;
    first = b1 * input - a1 * output + second;
    second = b2 * input - a2 * output;
    x[i] = output;
  }
}

/** Entries smaller than this do not move their cable: the limit is checked instead of divided by. No unit. */
const STILL = 1e-12;

/**
 * How far one can go from `from` along `direction` with every tension inside [min, max].
 *
 * @param slack N: a tension this far outside still counts as inside (rounding)
 * @param out   two numbers [N]: first and last step; first > last when there is none
 * @source slab test along a line; interval form of Pott, Bruckmann and Mikelsons 2009
 */
export function spanWithinLimits(from: Float64Array, direction: Float64Array, min: number, max: number, slack: number, out: Float64Array): Float64Array {
  let first = -Infinity;
  let last = Infinity;
  for (let i = 0; i < from.length; i++) {
    const at = from[i]!;
    const rate = direction[i]!;
    if (rate > STILL) {
      first = Math.max(first, (min - at) / rate);
      last = Math.min(last, (max - at) / rate);
    } else if (rate < -STILL) {
      first = Math.max(first, (max - at) / rate);
      last = Math.min(last, (min - at) / rate);
    } else if (at < min - slack || at > max + slack) {
      first = Infinity;
      last = -Infinity;
    }
  }
  out[0] = first;
  out[1] = last;
  return out;
}

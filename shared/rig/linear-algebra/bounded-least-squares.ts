import { NumericError } from '../numeric-error';
import { createRowFactor, factorRows, leastSquaresSolution } from './row-factor';

/**
 * x within [lower, upper] in every entry that makes |B x - target| smallest (2-norm).
 *
 * Active set: entries start at their lower bound and are set free one at a time, the steepest first, while the
 * residual can still fall; a free set never loses independence, so B may have more columns than rows.
 *
 * @param B      n columns of m numbers each
 * @param target m numbers
 * @throws NumericError NO_CONVERGENCE when the active set does not settle (entries not finite)
 * @source Lawson and Hanson 1974 (NNLS); Stark and Parker 1995 (two bounds) (cited from memory)
 */
export function boundedLeastSquares(B: readonly Float64Array[], target: Float64Array, lower: number, upper: number): Float64Array {
  const n = B.length;
  const m = target.length;
  const x = new Float64Array(n).fill(lower);
  const free = new Set<number>();
  const tolerance = 1e-13 * Math.max(1e-300, ...B.map((column) => Math.hypot(...column))) * (Math.hypot(...target) + Math.abs(upper) + Math.abs(lower));
  /** Entries that rounding sent straight back to their bound: not tried again until something else moves. */
  const refused = new Set<number>();
  for (let round = 0; round < 40 * n; round++) {
    const residual = residualOf(B, x, target);
    const entering = steepest(B, residual, x, lower, upper, free, refused, tolerance);
    if (entering < 0 || free.size === m) return x;
    const from = x[entering]!;
    free.add(entering);
    const moved = settle(B, target, x, free, lower, upper, entering);
    if (moved) refused.clear();
    else {
      free.delete(entering);
      x[entering] = from;
      refused.add(entering);
    }
  }
  throw new NumericError('NO_CONVERGENCE', 'The bounded least-squares problem did not settle; check that every number is finite.');
}

/** Moves the free entries to their best values, fixing those that meet a bound on the way; false when `entering` would leave its bounds at once. */
function settle(B: readonly Float64Array[], target: Float64Array, x: Float64Array, free: Set<number>, lower: number, upper: number, entering: number): boolean {
  for (let first = true; free.size > 0; first = false) {
    const members = [...free];
    const best = bestFree(B, target, x, members);
    if (first) {
      const value = best[members.indexOf(entering)]!;
      if (x[entering] === lower ? value <= lower : value >= upper) return false;
    }
    let step = 1;
    members.forEach((i, k) => {
      const to = best[k]!;
      const bound = to < lower ? lower : to > upper ? upper : Number.NaN;
      if (!Number.isNaN(bound)) step = Math.min(step, (bound - x[i]!) / (to - x[i]!));
    });
    members.forEach((i, k) => {
      const to = best[k]!;
      const next = x[i]! + step * (to - x[i]!);
      const hits = step < 1 && ((to < lower && next <= lower + 1e-12 * (upper - lower)) || (to > upper && next >= upper - 1e-12 * (upper - lower)));
      if (hits) {
        x[i] = to < lower ? lower : upper;
        free.delete(i);
      } else x[i] = next;
    });
    if (step === 1) return true;
  }
  return true;
}

/** Best values of the free entries with the others held where they are. */
function bestFree(B: readonly Float64Array[], target: Float64Array, x: Float64Array, members: readonly number[]): Float64Array {
  const m = target.length;
  const held = new Set(members);
  const rest = target.slice();
  B.forEach((column, i) => {
    if (held.has(i)) return;
    for (let row = 0; row < m; row++) rest[row] = rest[row]! - column[row]! * x[i]!;
  });
  const rows = new Float64Array(members.length * m);
  members.forEach((i, k) => rows.set(B[i]!, k * m));
  const factor = factorRows(rows, createRowFactor(members.length, m));
  return leastSquaresSolution(factor, rest, new Float64Array(members.length));
}

function residualOf(B: readonly Float64Array[], x: Float64Array, target: Float64Array): Float64Array {
  const residual = target.slice();
  B.forEach((column, i) => {
    for (let row = 0; row < residual.length; row++) residual[row] = residual[row]! - column[row]! * x[i]!;
  });
  return residual;
}

function steepest(
  B: readonly Float64Array[],
  residual: Float64Array,
  x: Float64Array,
  lower: number,
  upper: number,
  free: Set<number>,
  refused: Set<number>,
  tolerance: number,
): number {
  let best = -1;
  let bestSlope = tolerance;
  B.forEach((column, i) => {
    if (free.has(i) || refused.has(i) || lower === upper) return;
    let slope = 0;
    for (let row = 0; row < residual.length; row++) slope += column[row]! * residual[row]!;
    const gain = x[i] === upper ? -slope : slope;
    if (gain > bestSlope) {
      best = i;
      bestSlope = gain;
    }
  });
  return best;
}

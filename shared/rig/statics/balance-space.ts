import { createRowFactor, conditionBound, factorRows, leastNormSolution, nullDirection } from '../linear-algebra/row-factor';
import { singularRows } from '../linear-algebra/singular-values';
import { RANK_TOLERANCE } from './rank-of';

/** Everything that balances: all t with A t + w = 0 are `smallest(w) + sum z_j basis_j`. */
export type BalanceSpace = {
  rank: number;
  /** n - rank orthonormal vectors of n: tensions that pull on nothing but each other. */
  basis: Float64Array[];
  /** Smallest tensions (2-norm) [N] that balance the part of the wrench within reach. */
  smallest(wrench: ArrayLike<number>): Float64Array;
  /** The part of the wrench that no tensions can balance: zero unless the rank is below 7. */
  outOfReach(wrench: ArrayLike<number>): Float64Array;
};

/** Factors of safety between the sure bound of `conditionBound` and the rank tolerance. */
const SURE = 10;

/**
 * Solutions of A t + w = 0 for one structure matrix (7 x n row-major), full rank or not.
 *
 * A sure bound on the condition decides full rank cheaply; otherwise singular values decide, as `rankOf` does.
 *
 * @throws NumericError NO_CONVERGENCE when an entry of A is not finite
 */
export function balanceSpace(A: Float64Array, n: number): BalanceSpace {
  const factor = factorRows(A, createRowFactor(7, n));
  if (conditionBound(factor) > SURE * RANK_TOLERANCE) {
    return {
      rank: 7,
      basis: Array.from({ length: n - 7 }, (_, j) => nullDirection(factor, j, new Float64Array(n))),
      smallest: (wrench) => leastNormSolution(factor, negated(wrench), new Float64Array(n)),
      outOfReach: () => new Float64Array(7),
    };
  }
  return fromSingularRows(A, n);
}

function fromSingularRows(A: Float64Array, n: number): BalanceSpace {
  const { values, left, rows } = singularRows(A, 7, n);
  const rank = values.filter((value) => value > RANK_TOLERANCE * values[0]!).length;
  const reach = new Float64Array(rank * n);
  for (let k = 0; k < rank; k++) for (let i = 0; i < n; i++) reach[k * n + i] = rows[k * n + i]! / values[k]!;
  const factor = factorRows(reach, createRowFactor(rank, n));
  const share = (wrench: ArrayLike<number>, k: number) => {
    let sum = 0;
    for (let row = 0; row < 7; row++) sum += left[k * 7 + row]! * wrench[row]!;
    return sum;
  };
  return {
    rank,
    basis: Array.from({ length: n - rank }, (_, j) => nullDirection(factor, j, new Float64Array(n))),
    smallest(wrench) {
      const out = new Float64Array(n);
      for (let k = 0; k < rank; k++) {
        const along = -share(wrench, k) / values[k]!;
        for (let i = 0; i < n; i++) out[i] = out[i]! + along * reach[k * n + i]!;
      }
      return out;
    },
    outOfReach(wrench) {
      const out = new Float64Array(7);
      for (let k = rank; k < 7; k++) {
        const along = share(wrench, k);
        for (let row = 0; row < 7; row++) out[row] = out[row]! + along * left[k * 7 + row]!;
      }
      return out;
    },
  };
}

function negated(wrench: ArrayLike<number>): Float64Array {
  const out = new Float64Array(7);
  for (let row = 0; row < 7; row++) out[row] = -wrench[row]!;
  return out;
}

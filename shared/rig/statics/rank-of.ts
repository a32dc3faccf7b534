import { singularValues } from '../linear-algebra/singular-values';

/** A singular value counts when it is above this share of the largest. No unit. */
export const RANK_TOLERANCE = 1e-9;

/**
 * Rank of a structure matrix: how many singular values are above 1e-9 of the largest.
 *
 * @param A 7 x n row-major
 * @throws NumericError NO_CONVERGENCE when an entry is not finite
 */
export function rankOf(A: Float64Array, n: number): number {
  const values = singularValues(A, 7, n);
  const largest = values[0]!;
  return values.filter((value) => value > RANK_TOLERANCE * largest).length;
}

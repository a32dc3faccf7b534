import { balanceSpace } from './balance-space';

/**
 * The null vector of a structure matrix: tensions that pull on nothing but each other.
 *
 * With one spare cable it is unique up to its sign, and its sum is made positive. With more, it is the direction in
 * the null space nearest to equal tensions in all cables, which gives the same vector for one spare cable.
 *
 * @param A 7 x n row-major
 * @returns n numbers of 2-norm 1 with a sum of zero or above, or null when the rank is below 7
 * @throws NumericError NO_CONVERGENCE when an entry of A is not finite
 */
export function nullVector(A: Float64Array, n: number): Float64Array | null {
  const { rank, basis } = balanceSpace(A, n);
  return rank < 7 || basis.length === 0 ? null : nearestToEqual(basis);
}

/** Unit vector of the span of an orthonormal basis that is nearest to equal entries; the first basis vector when none is nearer. */
export function nearestToEqual(basis: readonly Float64Array[]): Float64Array {
  const first = basis[0]!;
  if (basis.length === 1) return sum(first) < 0 ? first.map((value) => -value) : first;
  const out = new Float64Array(first.length);
  for (const vector of basis) {
    const along = sum(vector);
    for (let i = 0; i < out.length; i++) out[i] = out[i]! + along * vector[i]!;
  }
  const norm = Math.hypot(...out);
  // Equal tensions are at right angles to the null space: no direction is nearer than another.
  if (norm < 1e-9) return first;
  return out.map((value) => value / norm);
}

function sum(vector: Float64Array): number {
  return vector.reduce((total, value) => total + value, 0);
}

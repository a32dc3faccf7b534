import { NumericError } from '../numeric-error';

/**
 * Singular value decomposition of the transpose of a matrix with few rows: A = U diag(s) V^T, A m x n, m <= n.
 * Returned with the rows rotated: row k of `rows` is s_k v_k^T, and row k of `left` is u_k^T.
 */
export type RowDecomposition = {
  /** m, largest first, in the unit of A. */
  values: Float64Array;
  /** m x m, row k = left singular vector k. */
  left: Float64Array;
  /** m x n, row k = right singular vector k times its singular value. */
  rows: Float64Array;
};

const SWEEPS = 60;

/**
 * Singular values and vectors by one-sided Jacobi rotations on the rows: accurate for small values too.
 *
 * @param A m x n row-major, not changed
 * @throws NumericError NO_CONVERGENCE when the entries are not finite
 * @source Hestenes 1958; Golub and Van Loan, Matrix Computations, one-sided Jacobi (cited from memory)
 */
export function singularRows(A: Float64Array, m: number, n: number): RowDecomposition {
  const rows = A.slice(0, m * n);
  const left = new Float64Array(m * m);
  for (let k = 0; k < m; k++) left[k * m + k] = 1;
  let turnedAny = true;
  for (let sweep = 0; turnedAny; sweep++) {
    if (sweep === SWEEPS) throw new NumericError('NO_CONVERGENCE', 'The singular values did not settle; check that every entry is finite.');
    turnedAny = false;
    for (let j = 0; j < m - 1; j++) {
      for (let k = j + 1; k < m; k++) {
        if (turnApart(rows, left, m, n, j, k)) turnedAny = true;
      }
    }
  }
  return sorted(rows, left, m, n);
}

/** Singular values only, largest first. @throws NumericError NO_CONVERGENCE when the entries are not finite */
export function singularValues(A: Float64Array, m: number, n: number): Float64Array {
  return singularRows(A, m, n).values;
}

/** Turns rows j and k so that they become orthogonal; false when they already are to rounding. */
function turnApart(rows: Float64Array, left: Float64Array, m: number, n: number, j: number, k: number): boolean {
  let jj = 0;
  let kk = 0;
  let jk = 0;
  for (let i = 0; i < n; i++) {
    const a = rows[j * n + i]!;
    const b = rows[k * n + i]!;
    jj += a * a;
    kk += b * b;
    jk += a * b;
  }
  if (Math.abs(jk) <= 1e-16 * Math.sqrt(jj * kk) || jk === 0) return false;
  const zeta = (kk - jj) / (2 * jk);
  const tan = (zeta >= 0 ? 1 : -1) / (Math.abs(zeta) + Math.sqrt(1 + zeta * zeta));
  const cos = 1 / Math.sqrt(1 + tan * tan);
  turn(rows, n, j, k, cos, cos * tan);
  turn(left, m, j, k, cos, cos * tan);
  // Rounding alone keeps a residue near 1e-16 for ever; only a turn above it counts as work left to do.
  return Math.abs(jk) > 4e-16 * Math.sqrt(jj * kk);
}

function turn(rows: Float64Array, n: number, j: number, k: number, cos: number, sin: number): void {
  for (let i = 0; i < n; i++) {
    const a = rows[j * n + i]!;
    const b = rows[k * n + i]!;
    rows[j * n + i] = cos * a - sin * b;
    rows[k * n + i] = sin * a + cos * b;
  }
}

function sorted(rows: Float64Array, left: Float64Array, m: number, n: number): RowDecomposition {
  const norms = Array.from({ length: m }, (_, k) => Math.hypot(...rows.subarray(k * n, (k + 1) * n)));
  const order = norms.map((_, k) => k).sort((a, b) => norms[b]! - norms[a]!);
  const out: RowDecomposition = { values: new Float64Array(m), left: new Float64Array(m * m), rows: new Float64Array(m * n) };
  order.forEach((from, to) => {
    out.values[to] = norms[from]!;
    out.left.set(left.subarray(from * m, (from + 1) * m), to * m);
    out.rows.set(rows.subarray(from * n, (from + 1) * n), to * n);
  });
  return out;
}

/**
 * Householder factorisation of a wide matrix by its rows: A (m x n, m <= n, full rank) with A^T = Q [R; 0].
 *
 * The first m columns of Q span the rows of A, the last n - m its null space. One factor serves the null vector, the
 * smallest solution of A x = b and the least-squares solution of A^T y = c, without forming A A^T.
 *
 * @source Householder 1958; Golub and Van Loan, Matrix Computations (cited from memory)
 */
export type RowFactor = {
  readonly m: number;
  readonly n: number;
  /** m x n: row k holds reflector k from entry k on. */
  readonly reflectors: Float64Array;
  /** m: 2 / |reflector|^2, or 0 where the row had nothing left to reflect. */
  readonly scale: Float64Array;
  /** m x m, upper triangle, row-major: R. */
  readonly R: Float64Array;
  /** m: work space for triangular solves. */
  readonly work: Float64Array;
};

/** Memory for factors of m x n matrices; make one and reuse it in a loop. */
export function createRowFactor(m: number, n: number): RowFactor {
  return { m, n, reflectors: new Float64Array(m * n), scale: new Float64Array(m), R: new Float64Array(m * m), work: new Float64Array(m) };
}

/** Factors A (m x n row-major, not changed) into `f`, in place, without allocation. */
export function factorRows(A: Float64Array, f: RowFactor): RowFactor {
  const { m, n, reflectors: v, scale, R } = f;
  for (let i = 0; i < m * n; i++) v[i] = A[i]!;
  for (let k = 0; k < m; k++) {
    const row = k * n;
    let tail = 0;
    for (let i = k; i < n; i++) tail += v[row + i]! * v[row + i]!;
    const head = v[row + k]!;
    const norm = head > 0 ? -Math.sqrt(tail) : Math.sqrt(tail);
    R[k * m + k] = norm;
    v[row + k] = head - norm;
    const size2 = tail - head * norm - norm * head + norm * norm;
    const s = size2 > 0 ? 2 / size2 : 0;
    scale[k] = s;
    for (let j = k + 1; j < m; j++) {
      const other = j * n;
      let dot = 0;
      for (let i = k; i < n; i++) dot += v[row + i]! * v[other + i]!;
      dot *= s;
      for (let i = k; i < n; i++) v[other + i] = v[other + i]! - dot * v[row + i]!;
      R[k * m + j] = v[other + k]!;
    }
  }
  return f;
}

/**
 * A sure lower bound of (smallest singular value) / (largest), no unit: 1 / (|R|_F |R^-1|_F).
 * 0 when R has a zero on its diagonal.
 */
export function conditionBound(f: RowFactor): number {
  const { m, R, work } = f;
  let size = 0;
  let inverse = 0;
  for (let c = 0; c < m; c++) {
    if (R[c * m + c] === 0) return 0;
    // column c of R^-1 by back substitution
    for (let r = c; r >= 0; r--) {
      let sum = r === c ? 1 : 0;
      for (let k = r + 1; k <= c; k++) sum -= R[r * m + k]! * work[k]!;
      const x = sum / R[r * m + r]!;
      work[r] = x;
      inverse += x * x;
      size += R[r * m + c]! * R[r * m + c]!;
    }
  }
  return 1 / Math.sqrt(size * inverse);
}

/** x := Q x (n numbers), in place. */
export function applyQ(f: RowFactor, x: Float64Array): Float64Array {
  for (let k = f.m - 1; k >= 0; k--) reflect(f, k, x);
  return x;
}

/** x := Q^T x (n numbers), in place. */
export function applyQTransposed(f: RowFactor, x: Float64Array): Float64Array {
  for (let k = 0; k < f.m; k++) reflect(f, k, x);
  return x;
}

function reflect(f: RowFactor, k: number, x: Float64Array): void {
  const { n, reflectors: v } = f;
  const row = k * n;
  let dot = 0;
  for (let i = k; i < n; i++) dot += v[row + i]! * x[i]!;
  dot *= f.scale[k]!;
  for (let i = k; i < n; i++) x[i] = x[i]! - dot * v[row + i]!;
}

/** Smallest x (2-norm) with A x = b: writes n numbers into `out`. b has m numbers and is not changed. */
export function leastNormSolution(f: RowFactor, b: ArrayLike<number>, out: Float64Array): Float64Array {
  const { m, n, R } = f;
  for (let r = 0; r < m; r++) {
    let sum = b[r]!;
    for (let k = 0; k < r; k++) sum -= R[k * m + r]! * out[k]!;
    out[r] = sum / R[r * m + r]!;
  }
  for (let i = m; i < n; i++) out[i] = 0;
  return applyQ(f, out);
}

/** y (m numbers, into `out`) that makes |A^T y - c| smallest. c has n numbers and is overwritten. */
export function leastSquaresSolution(f: RowFactor, c: Float64Array, out: Float64Array): Float64Array {
  const { m, R } = f;
  applyQTransposed(f, c);
  for (let r = m - 1; r >= 0; r--) {
    let sum = c[r]!;
    for (let k = r + 1; k < m; k++) sum -= R[r * m + k]! * out[k]!;
    out[r] = sum / R[r * m + r]!;
  }
  return out;
}

/** Orthonormal null vector number j (0 to n - m - 1) of A into `out` (n numbers). */
export function nullDirection(f: RowFactor, j: number, out: Float64Array): Float64Array {
  out.fill(0);
  out[f.m + j] = 1;
  return applyQ(f, out);
}

import { NumericError } from '../numeric-error';

export type SymmetricEigen = {
  /** Largest first. */
  values: number[];
  /** vectors[k] belongs to values[k]; norm 1, sign as it came. */
  vectors: number[][];
};

/**
 * Eigenvalues and eigenvectors of a small symmetric matrix by cyclic Jacobi rotations.
 *
 * @param matrix rows; only its symmetric part is used
 * @throws NumericError NO_CONVERGENCE when an entry is not finite
 * @source Jacobi 1846; Golub and Van Loan, Matrix Computations (cited from memory)
 */
export function symmetricEigen(matrix: readonly (readonly number[])[]): SymmetricEigen {
  const n = matrix.length;
  const S = matrix.map((row, j) => row.map((value, k) => (value + matrix[k]![j]!) / 2));
  const V = S.map((_, j) => S.map((__, k) => (j === k ? 1 : 0)));
  for (let sweep = 0; ; sweep++) {
    if (sweep === 60) throw new NumericError('NO_CONVERGENCE', 'The eigenvalues did not settle; check that every number is finite.');
    let turned = false;
    for (let p = 0; p < n - 1; p++) {
      for (let q = p + 1; q < n; q++) {
        const off = S[p]![q]!;
        if (Math.abs(off) <= 1e-300 || Math.abs(off) <= 1e-17 * (Math.abs(S[p]![p]!) + Math.abs(S[q]![q]!))) continue;
        turned = true;
        const theta = (S[q]![q]! - S[p]![p]!) / (2 * off);
        const t = (theta >= 0 ? 1 : -1) / (Math.abs(theta) + Math.sqrt(theta * theta + 1));
        const c = 1 / Math.sqrt(t * t + 1);
        turnBoth(S, V, p, q, c, c * t);
      }
    }
    if (!turned) break;
  }
  const order = S.map((_, k) => k).sort((a, b) => S[b]![b]! - S[a]![a]!);
  return { values: order.map((k) => S[k]![k]!), vectors: order.map((k) => V.map((row) => row[k]!)) };
}

function turnBoth(S: number[][], V: number[][], p: number, q: number, c: number, s: number): void {
  const columns = (row: number[]) => {
    const [a, b] = [row[p]!, row[q]!];
    row[p] = c * a - s * b;
    row[q] = s * a + c * b;
  };
  S.forEach(columns);
  V.forEach(columns);
  const [rowP, rowQ] = [S[p]!.slice(), S[q]!.slice()];
  S[p] = rowP.map((a, k) => c * a - s * rowQ[k]!);
  S[q] = rowQ.map((b, k) => s * rowP[k]! + c * b);
  // The rotation was chosen to make this zero; what rounding leaves would keep the sweeps going.
  S[p][q] = 0;
  S[q][p] = 0;
}

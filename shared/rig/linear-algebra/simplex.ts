import { NumericError } from '../numeric-error';

/**
 * Largest c . x with G x <= h and x >= 0, for h >= 0 (so that x = 0 is allowed): tableau simplex, small and dense.
 *
 * @param G rows of coefficients
 * @returns the best x
 * @throws NumericError UNDEFINED when nothing limits c . x
 * @source Dantzig 1951, with the smallest-index rule of Bland 1977, which cannot cycle (cited from memory)
 */
export function maximise(c: readonly number[], G: readonly (readonly number[])[], h: readonly number[]): number[] {
  const columns = c.length;
  const rows = G.length;
  const width = columns + rows + 1;
  const tableau = G.map((row, r) => {
    const line = new Float64Array(width);
    line.set(row);
    line[columns + r] = 1;
    line[width - 1] = h[r]!;
    return line;
  });
  const gain = new Float64Array(width);
  gain.set(c);
  const basic = G.map((_, r) => columns + r);
  for (;;) {
    const entering = gain.findIndex((value, k) => k < width - 1 && value > 1e-12);
    if (entering < 0) break;
    const leaving = leavingRow(tableau, basic, entering);
    if (leaving < 0) throw new NumericError('UNDEFINED', 'Nothing limits this linear programme, so it has no best point.');
    pivot(tableau, gain, leaving, entering);
    basic[leaving] = entering;
  }
  const x = new Array<number>(columns).fill(0);
  basic.forEach((variable, r) => {
    if (variable < columns) x[variable] = tableau[r]![width - 1]!;
  });
  return x;
}

function leavingRow(tableau: Float64Array[], basic: number[], entering: number): number {
  let best = -1;
  let bestRatio = Infinity;
  tableau.forEach((line, r) => {
    if (line[entering]! <= 1e-12) return;
    const ratio = line[line.length - 1]! / line[entering]!;
    if (ratio < bestRatio || (ratio === bestRatio && basic[r]! < basic[best]!)) {
      best = r;
      bestRatio = ratio;
    }
  });
  return best;
}

function pivot(tableau: Float64Array[], gain: Float64Array, leaving: number, entering: number): void {
  const line = tableau[leaving]!;
  const by = line[entering]!;
  for (let k = 0; k < line.length; k++) line[k] = line[k]! / by;
  for (const other of [...tableau, gain]) {
    if (other === line) continue;
    const factor = other[entering]!;
    if (factor === 0) continue;
    for (let k = 0; k < line.length; k++) other[k] = other[k]! - factor * line[k]!;
  }
}

import { boundedLeastSquares } from '../linear-algebra/bounded-least-squares';
import type { RigModel } from '../rig-model';
import { wrenchSize, wrenchWeights } from './wrench-size';

/**
 * Tensions within the limits that come nearest to balancing a wrench, and what is missing.
 *
 * Smallest |W (A t + w)| over min <= t_i <= max, with W bringing moments to newtons over 0.1 m.
 *
 * @param A 7 x n row-major
 * @returns shortBy [N], wrenchError = A t + w, tensions n [N]
 * @throws NumericError NO_CONVERGENCE when numbers are not finite
 * @source Stark and Parker 1995 (bounded least squares)
 */
export function nearestBalance(rig: RigModel, A: Float64Array, wrench: ArrayLike<number>, min: number, max: number) {
  const n = rig.cableCount;
  const weights = wrenchWeights(rig);
  const columns = Array.from({ length: n }, (_, i) => weights.map((weight, row) => weight * A[row * n + i]!));
  const target = weights.map((weight, row) => -weight * wrench[row]!);
  const tensions = boundedLeastSquares(columns, target, min, max);
  const wrenchError = Float64Array.from(wrench);
  for (let row = 0; row < 7; row++) {
    for (let i = 0; i < n; i++) wrenchError[row] = wrenchError[row]! + A[row * n + i]! * tensions[i]!;
  }
  return { shortBy: wrenchSize(rig, wrenchError), wrenchError, tensions };
}

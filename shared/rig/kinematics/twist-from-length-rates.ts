import { conditionBound, createRowFactor, factorRows, leastSquaresSolution } from '../linear-algebra/row-factor';
import { NumericError } from '../numeric-error';
import type { Pose } from '../pose';
import type { RigModel } from '../rig-model';
import { rankOf } from '../statics/rank-of';
import { requireNumbers } from '../statics/require-numbers';
import { structureMatrix } from './structure-matrix';

/**
 * Twist from cable speeds: least-squares solution of -A^T twist = lengthRates.
 *
 * @param lengthRates n [m/s]
 * @returns 7: velocity of the palm origin [m/s] and angular velocity [rad/s] in base axes, grasp rate
 * @throws NumericError SINGULAR when the lengths do not tell the twist at this pose, BAD_REQUEST, UNDEFINED when a cable has no length
 */
export function twistFromLengthRates(rig: RigModel, pose: Pose, lengthRates: ArrayLike<number>): Float64Array {
  const n = rig.cableCount;
  requireNumbers(lengthRates, n, 'A set of length rates');
  const A = structureMatrix(rig, pose, new Float64Array(7 * n));
  const factor = factorRows(A, createRowFactor(7, n));
  if (conditionBound(factor) < 1e-8 && rankOf(A, n) < 7) {
    throw new NumericError('SINGULAR', 'At this pose some motion leaves all cable lengths unchanged, so the lengths do not tell the twist.');
  }
  return leastSquaresSolution(factor, Float64Array.from(lengthRates, (rate) => -rate), new Float64Array(7));
}

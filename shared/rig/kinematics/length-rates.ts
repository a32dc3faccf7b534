import type { Pose } from '../pose';
import type { RigModel } from '../rig-model';
import { requireSeven } from '../statics/require-numbers';
import { structureMatrix } from './structure-matrix';

/**
 * Cable speeds from a twist: ldot = -A^T twist.
 *
 * @param twist 7: velocity of the palm origin [m/s], angular velocity [rad/s], both in base axes, grasp rate [m/s or rad/s]
 * @param out   n [m/s], positive when a cable pays out; written in place
 * @throws NumericError BAD_REQUEST, UNDEFINED when a cable has no length
 * @source virtual work, e.g. Gouttefarde and Gosselin 2006
 */
export function lengthRates(rig: RigModel, pose: Pose, twist: ArrayLike<number>, out: Float64Array): Float64Array {
  requireSeven(twist, 'A twist');
  const n = rig.cableCount;
  const A = structureMatrix(rig, pose, new Float64Array(7 * n));
  for (let i = 0; i < n; i++) {
    let sum = 0;
    for (let row = 0; row < 7; row++) sum -= A[row * n + i]! * twist[row]!;
    out[i] = sum;
  }
  return out;
}

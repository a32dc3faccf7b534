import { structureMatrix } from '../kinematics/structure-matrix';
import type { Pose } from '../pose';
import type { RigModel } from '../rig-model';
import { requireNumbers } from './require-numbers';

/**
 * Wrench from outside (hand, load) that given tensions hold in balance: w = -A t.
 *
 * What the hand feels is the opposite, A t.
 *
 * @param tensions n [N]
 * @param out      7: force [N] and moment about the palm origin [N m] in base axes, grasp force [N or N m]; written in place
 * @throws NumericError BAD_REQUEST for wrong or non-finite numbers, UNDEFINED when a cable has no length
 */
export function wrenchFromTensions(rig: RigModel, pose: Pose, tensions: ArrayLike<number>, out: Float64Array): Float64Array {
  const n = rig.cableCount;
  requireNumbers(tensions, n, 'A set of tensions');
  const A = structureMatrix(rig, pose, new Float64Array(7 * n));
  for (let row = 0; row < 7; row++) {
    let sum = 0;
    for (let i = 0; i < n; i++) sum -= A[row * n + i]! * tensions[i]!;
    out[row] = sum;
  }
  return out;
}

import type { RigModel } from '../rig-model';

/** Arm that turns a moment into a force of comparable weight, m. The contract fixes it: moments are divided by it. */
export const MOMENT_ARM_M = 0.1;

/**
 * Seven factors that bring a wrench to newtons: 1 for forces, 1 / 0.1 m for moments. The grasp entry is a force
 * for sliding grasps and a moment for hinged ones.
 */
export function wrenchWeights(rig: RigModel): Float64Array {
  const moment = 1 / MOMENT_ARM_M;
  return Float64Array.of(1, 1, 1, moment, moment, moment, rig.graspKind === 'hinge' ? moment : 1);
}

/** Size of a wrench in N, moments over 0.1 m: square root of the sum of squares. */
export function wrenchSize(rig: RigModel, wrench: ArrayLike<number>): number {
  return Math.hypot(...wrenchWeights(rig).map((weight, row) => weight * wrench[row]!));
}

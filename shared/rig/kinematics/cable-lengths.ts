import type { Pose } from '../pose';
import type { RigModel } from '../rig-model';
import { attachmentPoints } from './attachment-points';

/**
 * Inverse kinematics: straight-line cable lengths from attachment to exit at a pose.
 *
 * @param out n [m], written in place; 0 when an attachment sits on its exit (nothing here needs the direction)
 * @throws NumericError BAD_REQUEST when q is zero or not finite
 */
export function cableLengths(rig: RigModel, pose: Pose, out: Float64Array): Float64Array {
  const points = attachmentPoints(rig, pose, new Float64Array(3 * rig.cableCount));
  for (let i = 0; i < rig.cableCount; i++) {
    const dx = rig.exits[3 * i]! - points[3 * i]!;
    const dy = rig.exits[3 * i + 1]! - points[3 * i + 1]!;
    const dz = rig.exits[3 * i + 2]! - points[3 * i + 2]!;
    out[i] = Math.sqrt(dx * dx + dy * dy + dz * dz);
  }
  return out;
}

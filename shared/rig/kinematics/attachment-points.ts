import type { Pose } from '../pose';
import type { RigModel } from '../rig-model';
import { attachmentInPalm } from './attachment-in-palm';
import { rotationEntries } from './rotation-entries';

/**
 * Attachment points of all cables in base axes at a pose: `p + R(q) b(g)`.
 *
 * @param pose p [m], q (x, y, z, w), grasp [m or rad]
 * @param out  3 x n [m], point after point, written in place
 * @throws NumericError BAD_REQUEST when q is zero or not finite
 */
export function attachmentPoints(rig: RigModel, pose: Pose, out: Float64Array): Float64Array {
  const R = rotationEntries(pose.q, new Float64Array(9));
  const b = new Float64Array(9);
  const [px, py, pz] = pose.p;
  for (let i = 0; i < rig.cableCount; i++) {
    attachmentInPalm(rig, i, pose.grasp, b);
    out[3 * i] = px + R[0]! * b[0]! + R[1]! * b[1]! + R[2]! * b[2]!;
    out[3 * i + 1] = py + R[3]! * b[0]! + R[4]! * b[1]! + R[5]! * b[2]!;
    out[3 * i + 2] = pz + R[6]! * b[0]! + R[7]! * b[1]! + R[8]! * b[2]!;
  }
  return out;
}

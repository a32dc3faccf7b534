import { NumericError } from '../numeric-error';
import type { Pose } from '../pose';
import type { RigModel } from '../rig-model';
import { attachmentInPalm } from './attachment-in-palm';
import { rotationEntries } from './rotation-entries';

/** Below this share of the frame's size a cable has no direction that means anything. No unit. */
export const SHORTEST_CABLE = 1e-9;

/** Room that every call fills anew: this runs for each sample of a recording. */
const rotation = new Float64Array(9);
const attachment = new Float64Array(9);

/**
 * Structure matrix of a rig at a pose: how cable tensions pull on palm and grasp.
 *
 * Column i is [u; r x u; (R db/dg) . u] for cable i, with u the unit vector from attachment to exit.
 * Moments are about the palm origin, in base axes. Balance: A t + w = 0.
 *
 * @param rig   revision with n cables
 * @param pose  p [m], q (x, y, z, w), grasp [m or rad]
 * @param out   7 x n, row-major, written in place
 * @returns out; entries of rows 1-3 and 7 (slide) have no unit, rows 4-6 and 7 (hinge) are in m
 * @throws NumericError UNDEFINED when a cable has no length, BAD_REQUEST when q is zero or not finite
 * @source  Gouttefarde and Gosselin 2006; virtual work for the grasp row
 */
export function structureMatrix(rig: RigModel, pose: Pose, out: Float64Array): Float64Array {
  const n = rig.cableCount;
  const R = rotationEntries(pose.q, rotation);
  const b = attachment;
  const [px, py, pz] = pose.p;
  for (let i = 0; i < n; i++) {
    attachmentInPalm(rig, i, pose.grasp, b);
    const rx = R[0]! * b[0]! + R[1]! * b[1]! + R[2]! * b[2]!;
    const ry = R[3]! * b[0]! + R[4]! * b[1]! + R[5]! * b[2]!;
    const rz = R[6]! * b[0]! + R[7]! * b[1]! + R[8]! * b[2]!;
    const gx = R[0]! * b[3]! + R[1]! * b[4]! + R[2]! * b[5]!;
    const gy = R[3]! * b[3]! + R[4]! * b[4]! + R[5]! * b[5]!;
    const gz = R[6]! * b[3]! + R[7]! * b[4]! + R[8]! * b[5]!;
    const lx = rig.exits[3 * i]! - px - rx;
    const ly = rig.exits[3 * i + 1]! - py - ry;
    const lz = rig.exits[3 * i + 2]! - pz - rz;
    const length = requireLength(rig, i, Math.sqrt(lx * lx + ly * ly + lz * lz));
    const ux = lx / length;
    const uy = ly / length;
    const uz = lz / length;
    out[i] = ux;
    out[n + i] = uy;
    out[2 * n + i] = uz;
    out[3 * n + i] = ry * uz - rz * uy;
    out[4 * n + i] = rz * ux - rx * uz;
    out[5 * n + i] = rx * uy - ry * ux;
    out[6 * n + i] = gx * ux + gy * uy + gz * uz;
  }
  return out;
}

/** The length itself, or a typed error when the cable is too short to have a direction. */
export function requireLength(rig: RigModel, i: number, length: number): number {
  const { min, max } = rig.frame;
  const size = Math.max(max[0] - min[0], max[1] - min[1], max[2] - min[2]);
  if (length > SHORTEST_CABLE * size) return length;
  if (Number.isNaN(length)) throw new NumericError('BAD_REQUEST', 'The pose has a number that is not finite.');
  throw new NumericError('UNDEFINED', `Cable ${i + 1} has no length at this pose, so its direction is undefined. Move the pose away from its exit.`);
}

import type { Pose } from '../pose';
import type { RigModel } from '../rig-model';
import { attachmentInPalm } from './attachment-in-palm';
import { rotationEntries } from './rotation-entries';
import { requireLength } from './structure-matrix';

/**
 * dA/dg: how the structure matrix changes as the grasp opens, palm held still.
 *
 * With r' = R db/dg: the cable vector changes by -r', its unit vector by u' = (-r' + u (u . r')) / length, and
 * column i becomes [u'; r' x u + r x u'; (R d2b/dg2) . u + r' . u'].
 *
 * @param out 7 x n, row-major, per m (slide) or per rad (hinge) of grasp, written in place
 * @throws NumericError UNDEFINED when a cable has no length, BAD_REQUEST when q is zero or not finite
 * @source derived here by hand; the tests compare it with central differences of `structureMatrix`
 */
export function structureMatrixGraspDerivative(rig: RigModel, pose: Pose, out: Float64Array): Float64Array {
  const n = rig.cableCount;
  const R = rotationEntries(pose.q, new Float64Array(9));
  const b = new Float64Array(9);
  const [px, py, pz] = pose.p;
  for (let i = 0; i < n; i++) {
    attachmentInPalm(rig, i, pose.grasp, b);
    const [rx, ry, rz] = turned(R, b, 0);
    const [gx, gy, gz] = turned(R, b, 3);
    const [hx, hy, hz] = turned(R, b, 6);
    const lx = rig.exits[3 * i]! - px - rx;
    const ly = rig.exits[3 * i + 1]! - py - ry;
    const lz = rig.exits[3 * i + 2]! - pz - rz;
    const length = requireLength(rig, i, Math.sqrt(lx * lx + ly * ly + lz * lz));
    const ux = lx / length;
    const uy = ly / length;
    const uz = lz / length;
    const along = ux * gx + uy * gy + uz * gz;
    const vx = (ux * along - gx) / length;
    const vy = (uy * along - gy) / length;
    const vz = (uz * along - gz) / length;
    out[i] = vx;
    out[n + i] = vy;
    out[2 * n + i] = vz;
    out[3 * n + i] = gy * uz - gz * uy + ry * vz - rz * vy;
    out[4 * n + i] = gz * ux - gx * uz + rz * vx - rx * vz;
    out[5 * n + i] = gx * uy - gy * ux + rx * vy - ry * vx;
    out[6 * n + i] = hx * ux + hy * uy + hz * uz + gx * vx + gy * vy + gz * vz;
  }
  return out;
}

function turned(R: Float64Array, v: Float64Array, at: number): [number, number, number] {
  const x = v[at]!;
  const y = v[at + 1]!;
  const z = v[at + 2]!;
  return [R[0]! * x + R[1]! * y + R[2]! * z, R[3]! * x + R[4]! * y + R[5]! * z, R[6]! * x + R[7]! * y + R[8]! * z];
}

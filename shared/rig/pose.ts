import { NumericError } from './numeric-error';

/** Three components in the axes that the name says. */
export type Vec3 = [number, number, number];

/** Quaternion (x, y, z, w). Everywhere in Tautbook it turns palm coordinates into base coordinates. */
export type Quat = [number, number, number, number];

/** Where the palm is: `p` [m] in base, `q` from palm to base (unit), `grasp` [m for slide rigs, rad for hinge rigs]. */
export type Pose = { p: Vec3; q: Quat; grasp: number };

/** How far a quaternion's norm may be from 1 and still count as a rotation written with few decimals. No unit. */
const UNIT_NORM_TOLERANCE = 1e-5;

/**
 * A pose that the kinematics can use: finite, with its quaternion brought to norm 1.
 *
 * @throws NumericError BAD_REQUEST when a number is not finite or q is not a unit quaternion within 1e-5
 */
export function requirePose(pose: Pose): Pose {
  if (![...pose.p, ...pose.q, pose.grasp].every(Number.isFinite) || pose.p.length !== 3 || pose.q.length !== 4) {
    throw new NumericError('BAD_REQUEST', 'A pose needs three finite numbers in p, four in q and a finite grasp.');
  }
  const norm = Math.hypot(...pose.q);
  if (Math.abs(norm - 1) > UNIT_NORM_TOLERANCE) {
    throw new NumericError('BAD_REQUEST', `The quaternion of a pose needs norm 1; this one has ${norm}. Divide it by its norm.`);
  }
  const [x, y, z, w] = pose.q;
  return { p: [...pose.p], q: [x / norm, y / norm, z / norm, w / norm], grasp: pose.grasp };
}

/** Pose from eight numbers in channel order x y z qx qy qz qw grasp, starting at `offset`. */
export function poseFromArray(values: ArrayLike<number>, offset = 0): Pose {
  const at = (i: number) => values[offset + i] ?? Number.NaN;
  return { p: [at(0), at(1), at(2)], q: [at(3), at(4), at(5), at(6)], grasp: at(7) };
}

/** Writes a pose as eight numbers in channel order x y z qx qy qz qw grasp. */
export function poseToArray(pose: Pose, out: Float64Array, offset = 0): Float64Array {
  out.set(pose.p, offset);
  out.set(pose.q, offset + 3);
  out[offset + 7] = pose.grasp;
  return out;
}

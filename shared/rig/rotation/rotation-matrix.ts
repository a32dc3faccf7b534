import { rotationEntries } from '../kinematics/rotation-entries';
import type { Quat, Vec3 } from '../pose';

/** Three rows. */
export type Matrix3 = [Vec3, Vec3, Vec3];

/** Rotation matrix of a quaternion: v in base = matrix times v in palm. @throws NumericError BAD_REQUEST when q is zero or not finite */
export function matrixFromQuat(q: Readonly<Quat>): Matrix3 {
  const m = rotationEntries(q, new Float64Array(9));
  const row = (k: number): Vec3 => [m[3 * k]!, m[3 * k + 1]!, m[3 * k + 2]!];
  return [row(0), row(1), row(2)];
}

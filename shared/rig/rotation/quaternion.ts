import { NumericError } from '../numeric-error';
import type { Quat, Vec3 } from '../pose';

/** Hamilton product a b: the rotation b, then a. Quaternions are (x, y, z, w). */
export function multiply(a: Readonly<Quat>, b: Readonly<Quat>): Quat {
  const [ax, ay, az, aw] = a;
  const [bx, by, bz, bw] = b;
  return [
    aw * bx + ax * bw + ay * bz - az * by,
    aw * by - ax * bz + ay * bw + az * bx,
    aw * bz + ax * by - ay * bx + az * bw,
    aw * bw - ax * bx - ay * by - az * bz,
  ];
}

/** The opposite rotation of a unit quaternion. */
export function conjugate(q: Readonly<Quat>): Quat {
  return [-q[0], -q[1], -q[2], q[3]];
}

/** q brought to norm 1. @throws NumericError BAD_REQUEST when q is zero or not finite */
export function normalised(q: Readonly<Quat>): Quat {
  const norm = Math.hypot(...q);
  if (!(norm > 0 && norm < Infinity)) throw new NumericError('BAD_REQUEST', 'A rotation needs a finite quaternion that is not zero.');
  return [q[0] / norm, q[1] / norm, q[2] / norm, q[3] / norm];
}

/** v turned by the unit quaternion q: palm axes to base axes for a pose's q. */
export function rotate(q: Readonly<Quat>, v: Readonly<Vec3>): Vec3 {
  const [x, y, z, w] = q;
  const tx = 2 * (y * v[2] - z * v[1]);
  const ty = 2 * (z * v[0] - x * v[2]);
  const tz = 2 * (x * v[1] - y * v[0]);
  return [v[0] + w * tx + y * tz - z * ty, v[1] + w * ty + z * tx - x * tz, v[2] + w * tz + x * ty - y * tx];
}

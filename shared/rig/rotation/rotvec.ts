import type { Quat, Vec3 } from '../pose';
import { canonical } from './canonical';
import { normalised } from './quaternion';

/**
 * Rotation vector (axis times angle [rad]) of a quaternion, angle in [0, pi].
 *
 * @throws NumericError BAD_REQUEST when q is zero or not finite
 */
export function rotvecFromQuat(q: Readonly<Quat>): Vec3 {
  const [x, y, z, w] = canonical(normalised(q));
  const sine = Math.hypot(x, y, z);
  // angle / sin(angle / 2); its limit at no rotation is 2
  const scale = sine === 0 ? 2 : (2 * Math.atan2(sine, w)) / sine;
  return [scale * x, scale * y, scale * z];
}

/** Unit quaternion of a rotation vector [rad]: exp of half of it. Inverse of `rotvecFromQuat`; w >= 0. */
export function quatFromRotvec(v: Readonly<Vec3>): Quat {
  const angle = Math.hypot(...v);
  // sin(angle / 2) / angle; the series below 1e-4 is exact to rounding
  const scale = angle < 1e-4 ? 0.5 - (angle * angle) / 48 : Math.sin(angle / 2) / angle;
  return canonical(normalised([scale * v[0], scale * v[1], scale * v[2], Math.cos(angle / 2)]));
}

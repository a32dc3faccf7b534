import type { Quat } from '../pose';
import { conjugate, multiply, normalised } from './quaternion';

/**
 * Angle [rad] of the rotation between two orientations, in [0, pi], whatever the signs of the quaternions.
 *
 * @throws NumericError BAD_REQUEST when a quaternion is zero or not finite
 * @source geodesic distance on SO(3), Huynh 2009; the two-argument arctangent keeps small and half-turn angles exact
 */
export function geodesicAngle(a: Readonly<Quat>, b: Readonly<Quat>): number {
  const [x, y, z, w] = multiply(conjugate(normalised(a)), normalised(b));
  return 2 * Math.atan2(Math.hypot(x, y, z), Math.abs(w));
}

import type { Quat } from '../pose';
import { canonical } from './canonical';
import { normalised } from './quaternion';

/**
 * Orientation at share s of the shorter way from a to b, at constant angular speed; w >= 0.
 *
 * @param s 0 at a, 1 at b; outside it goes on turning
 * @throws NumericError BAD_REQUEST when a quaternion is zero or not finite
 * @source Shoemake 1985
 */
export function slerp(a: Readonly<Quat>, b: Readonly<Quat>, s: number): Quat {
  const from = normalised(a);
  const to = normalised(b);
  const sign = from[0] * to[0] + from[1] * to[1] + from[2] * to[2] + from[3] * to[3] < 0 ? -1 : 1;
  const near: Quat = [sign * to[0], sign * to[1], sign * to[2], sign * to[3]];
  // Half the angle between them on the sphere of quaternions, from the chord: exact for tiny angles too.
  const apart = Math.hypot(from[0] - near[0], from[1] - near[1], from[2] - near[2], from[3] - near[3]);
  const together = Math.hypot(from[0] + near[0], from[1] + near[1], from[2] + near[2], from[3] + near[3]);
  const angle = 2 * Math.atan2(apart, together);
  const sine = Math.sin(angle);
  const [u, v] = sine < 1e-12 ? [1 - s, s] : [Math.sin((1 - s) * angle) / sine, Math.sin(s * angle) / sine];
  return canonical(
    normalised([u * from[0] + v * near[0], u * from[1] + v * near[1], u * from[2] + v * near[2], u * from[3] + v * near[3]]),
  );
}

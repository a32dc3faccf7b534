import type { Quat, Vec3 } from '../pose';
import { normalised } from './quaternion';

/** Below this the two half angles of a pitch of a quarter turn are rounding. No unit. */
const QUARTER_TURN = 1e-12;

/**
 * Yaw, pitch and roll [rad] of a quaternion: intrinsic z-y'-x'', R = Rz(yaw) Ry(pitch) Rx(roll), pitch in [-pi/2, pi/2].
 *
 * At a pitch of a quarter turn only the sum or difference of yaw and roll is fixed: roll is then 0.
 *
 * @throws NumericError BAD_REQUEST when q is zero or not finite
 * @source half-angle form: w + y and z - x hold (yaw - roll) / 2, w - y and z + x hold (yaw + roll) / 2; derived here
 */
export function eulerZyxFromQuat(q: Readonly<Quat>): Vec3 {
  const [x, y, z, w] = normalised(q);
  const up = Math.hypot(w + y, z - x);
  const down = Math.hypot(w - y, z + x);
  const pitch = 2 * Math.atan2(up - down, up + down);
  const half = Math.atan2(z - x, w + y);
  const full = Math.atan2(z + x, w - y);
  if (down < QUARTER_TURN) return [wrapped(2 * half), pitch, 0];
  if (up < QUARTER_TURN) return [wrapped(2 * full), pitch, 0];
  return [wrapped(full + half), pitch, wrapped(full - half)];
}

/** Unit quaternion of yaw, pitch and roll [rad]: intrinsic z-y'-x''. */
export function quatFromEulerZyx([yaw, pitch, roll]: Readonly<Vec3>): Quat {
  const [cy, sy] = [Math.cos(yaw / 2), Math.sin(yaw / 2)];
  const [cp, sp] = [Math.cos(pitch / 2), Math.sin(pitch / 2)];
  const [cr, sr] = [Math.cos(roll / 2), Math.sin(roll / 2)];
  const w = cy * cp * cr + sy * sp * sr;
  const sign = w < 0 ? -1 : 1;
  return [sign * (cy * cp * sr - sy * sp * cr), sign * (cy * sp * cr + sy * cp * sr), sign * (sy * cp * cr - cy * sp * sr), sign * w];
}

/** The same angle in (-pi, pi]. */
function wrapped(angle: number): number {
  if (angle > Math.PI) return angle - 2 * Math.PI;
  return angle <= -Math.PI ? angle + 2 * Math.PI : angle;
}

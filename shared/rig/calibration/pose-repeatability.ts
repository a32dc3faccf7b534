import { meanAndDeviation } from '../../stats/mean-and-deviation';
import { NumericError } from '../numeric-error';
import type { Quat, Vec3 } from '../pose';
import { conjugate, multiply, normalised } from '../rotation/quaternion';
import { rotvecFromQuat } from '../rotation/rotvec';

export type PositionRepeatability = {
  /** m: pose accuracy AP, distance of the barycentre of the attained positions from the command. */
  ap: number;
  /** m: mean distance of the attained positions from their barycentre. */
  lBar: number;
  /** m: standard deviation of those distances, divisor n - 1. */
  sL: number;
  /** m: pose repeatability RP = lBar + 3 sL. */
  rp: number;
};

export type OrientationRepeatability = {
  /** rad, about the base axes x, y, z: mean deviation from the command. */
  ap: Vec3;
  /** rad, about the base axes x, y, z: three standard deviations, divisor n - 1. */
  rp: Vec3;
};

/**
 * Pose accuracy and repeatability of a position that was approached several times.
 *
 * @throws NumericError TOO_SHORT below two approaches, BAD_REQUEST for values that are not finite
 * @source ISO 9283:1998, 7.2 (AP, RP) (cited from memory)
 */
export function positionRepeatability(command: Readonly<Vec3>, attained: readonly Readonly<Vec3>[]): PositionRepeatability {
  requireApproaches(attained.length);
  if (![command, ...attained].every((point) => point.length === 3 && point.every(Number.isFinite))) {
    throw new NumericError('BAD_REQUEST', 'A position needs three finite numbers.');
  }
  const centre = ([0, 1, 2] as const).map((axis) => meanAndDeviation(attained.map((point) => point[axis])).mean) as Vec3;
  const distances = attained.map((point) => Math.hypot(point[0] - centre[0], point[1] - centre[1], point[2] - centre[2]));
  const { mean: lBar, sd: sL } = meanAndDeviation(distances);
  const ap = Math.hypot(centre[0] - command[0], centre[1] - command[1], centre[2] - command[2]);
  return { ap, lBar, sL, rp: lBar + 3 * sL };
}

/**
 * The same for an orientation, axis by axis: deviations are rotation vectors from the command in base axes, which equal
 * the standard's angles for the small deviations that repeatability is about, and know no gimbal.
 *
 * @throws NumericError TOO_SHORT below two approaches, BAD_REQUEST for quaternions that are none
 * @source ISO 9283:1998, 7.2 (angles a, b, c) (cited from memory)
 */
export function orientationRepeatability(command: Readonly<Quat>, attained: readonly Readonly<Quat>[]): OrientationRepeatability {
  requireApproaches(attained.length);
  const back = conjugate(normalised(command));
  const deviations = attained.map((q) => rotvecFromQuat(multiply(normalised(q), back)));
  const about = ([0, 1, 2] as const).map((axis) => meanAndDeviation(deviations.map((deviation) => deviation[axis])));
  return { ap: about.map(({ mean }) => Math.abs(mean)) as Vec3, rp: about.map(({ sd }) => 3 * sd) as Vec3 };
}

function requireApproaches(count: number): void {
  if (count < 2) throw new NumericError('TOO_SHORT', `Repeatability needs at least two approaches of the same pose; there ${count === 1 ? 'is 1' : 'are none'}.`);
}

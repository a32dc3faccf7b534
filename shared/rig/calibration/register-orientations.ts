import { NumericError } from '../numeric-error';
import type { Quat } from '../pose';
import { geodesicAngle } from '../rotation/geodesic-angle';
import { meanRotation } from '../rotation/mean-rotation';
import { conjugate, multiply, normalised } from '../rotation/quaternion';

export type OrientationRegistration = {
  /** One base rotation for all: to_i = q from_i. w >= 0. */
  q: Quat;
  /** rad: angles that are left between q from_i and to_i. */
  rmsAngle: number;
  maxAngle: number;
};

/**
 * The rotation between two base frames from orientations seen in both (rig and tracker): to_i = q from_i.
 *
 * Smallest sum of squared chordal distances: the mean rotation of to_i from_i^-1. The signs of the quaternions do not matter.
 *
 * @throws NumericError TOO_SHORT without orientations, BAD_REQUEST for unequal numbers or quaternions that are none,
 *         UNDEFINED when several rotations fit equally well
 * @source Markley, Cheng, Crassidis and Oshman 2007 (mean quaternion)
 */
export function registerOrientations(from: readonly Readonly<Quat>[], to: readonly Readonly<Quat>[]): OrientationRegistration {
  if (from.length !== to.length) {
    throw new NumericError('BAD_REQUEST', `There are ${from.length} orientations on one side and ${to.length} on the other; each needs its partner.`);
  }
  const steps = from.map((quat, i) => multiply(normalised(to[i]!), conjugate(normalised(quat))));
  const q = meanRotation(steps);
  const angles = steps.map((step) => geodesicAngle(q, step));
  const squares = angles.reduce((sum, angle) => sum + angle * angle, 0);
  return { q, rmsAngle: Math.sqrt(squares / angles.length), maxAngle: angles.reduce((a, b) => Math.max(a, b), 0) };
}

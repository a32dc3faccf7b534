import { NumericError } from '../numeric-error';
import type { Quat, Vec3 } from '../pose';
import { multiply, normalised } from '../rotation/quaternion';
import { quatFromRotvec } from '../rotation/rotvec';

/**
 * Orientations that stand for all within an angle: the middle one and fourteen tilted by that angle about base axes,
 * to the faces and corners of a cube. A hand turns in every direction; the edge of the ball is where a rig fails first.
 *
 * @param angle  rad, 0 to pi; 0 gives the middle one alone
 * @param middle palm in base, unit; no turn when absent
 * @throws NumericError BAD_REQUEST
 */
export function orientationsWithin(angle: number, middle: Readonly<Quat> = [0, 0, 0, 1]): Quat[] {
  if (!(angle >= 0 && angle <= Math.PI)) throw new NumericError('BAD_REQUEST', 'The angle of a set of orientations lies between 0 and half a turn.');
  const centre = normalised(middle);
  if (angle === 0) return [centre];
  const axes: Vec3[] = [];
  for (let axis = 0; axis < 3; axis++) for (const side of [1, -1]) axes.push([0, 1, 2].map((k) => (k === axis ? side : 0)) as Vec3);
  const corner = 1 / Math.sqrt(3);
  for (const x of [corner, -corner]) for (const y of [corner, -corner]) for (const z of [corner, -corner]) axes.push([x, y, z]);
  return [centre, ...axes.map(([x, y, z]) => multiply(quatFromRotvec([angle * x, angle * y, angle * z]), centre))];
}

/** `count` grasps spread evenly over a range, both ends included; the middle alone when count is 1. */
export function graspsWithin({ min, max }: { readonly min: number; readonly max: number }, count: number): number[] {
  if (!Number.isInteger(count) || count < 1 || !(min <= max)) throw new NumericError('BAD_REQUEST', 'Grasps need a rising range and a whole number of them.');
  return Array.from({ length: count }, (_, k) => (count === 1 ? (min + max) / 2 : min + ((max - min) * k) / (count - 1)));
}

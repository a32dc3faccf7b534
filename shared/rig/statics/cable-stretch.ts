import { NumericError } from '../numeric-error';
import type { RigModel } from '../rig-model';
import { requireNumbers } from './require-numbers';

/**
 * How much longer each cable is than it would be without tension.
 *
 * Hooke: tension = axialStiffness (length - unstretched) / unstretched, with the length as it is under load, so the
 * stretch is length tension / (axialStiffness + tension).
 *
 * @param tensions n [N], not below zero: a cable cannot push
 * @param lengths  n [m], under load
 * @returns n [m]
 * @throws NumericError BAD_REQUEST for wrong, negative or non-finite numbers
 */
export function cableStretch(rig: RigModel, tensions: ArrayLike<number>, lengths: ArrayLike<number>): Float64Array {
  requireNumbers(tensions, rig.cableCount, 'A set of tensions');
  requireNumbers(lengths, rig.cableCount, 'A set of lengths');
  const out = new Float64Array(rig.cableCount);
  for (let i = 0; i < out.length; i++) {
    if (tensions[i]! < 0 || lengths[i]! < 0) throw new NumericError('BAD_REQUEST', `Cable ${i + 1} has a negative tension or length.`);
    out[i] = (lengths[i]! * tensions[i]!) / (rig.axialStiffness + tensions[i]!);
  }
  return out;
}

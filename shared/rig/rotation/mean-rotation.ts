import { symmetricEigen } from '../linear-algebra/symmetric-eigen';
import { NumericError } from '../numeric-error';
import type { Quat } from '../pose';
import { canonical } from './canonical';
import { normalised } from './quaternion';

/** Two eigenvalues closer than this share of the largest mean that no orientation is nearer than another. No unit. */
const TIE = 1e-12;

/**
 * Mean orientation: smallest sum of squared chordal distances, whatever the signs of the quaternions; w >= 0.
 *
 * @param weights one per quaternion, not below zero; all 1 when absent
 * @throws NumericError TOO_SHORT without quaternions, UNDEFINED when several orientations are equally near
 *         (for example two a half turn apart), BAD_REQUEST for weights or quaternions that are none
 * @source Markley, Cheng, Crassidis and Oshman 2007: eigenvector of sum w q q^T
 */
export function meanRotation(quats: readonly Readonly<Quat>[], weights?: readonly number[]): Quat {
  if (quats.length === 0) throw new NumericError('TOO_SHORT', 'A mean orientation needs at least one quaternion.');
  if (weights !== undefined && (weights.length !== quats.length || weights.some((weight) => !(weight >= 0 && weight < Infinity)))) {
    throw new NumericError('BAD_REQUEST', 'Weights need one number of zero or above for each quaternion.');
  }
  const sum = [0, 1, 2, 3].map(() => [0, 0, 0, 0]);
  quats.forEach((quat, i) => {
    const q = normalised(quat);
    for (let j = 0; j < 4; j++) for (let k = 0; k < 4; k++) sum[j]![k] = sum[j]![k]! + (weights?.[i] ?? 1) * q[j]! * q[k]!;
  });
  const { values, vectors } = symmetricEigen(sum);
  if (!(values[0]! - values[1]! > TIE * values[0]!)) {
    throw new NumericError('UNDEFINED', 'These orientations have no mean: several are equally near to all of them.');
  }
  return canonical(vectors[0] as Quat);
}

import { NumericError } from '../numeric-error';
import type { Quat } from '../pose';
import { canonical } from './canonical';
import { normalised } from './quaternion';
import type { Matrix3 } from './rotation-matrix';

/** How far a matrix may be from a rotation, in any entry of M M^T - I. No unit. */
const TOLERANCE = 1e-6;

/**
 * Unit quaternion of a rotation matrix, w >= 0, starting from its largest entry so that nothing cancels.
 *
 * @throws NumericError BAD_REQUEST when the matrix is not a proper rotation within 1e-6
 * @source Shepperd 1978
 */
export function quatFromMatrix(m: Readonly<Matrix3>): Quat {
  requireRotation(m);
  const [[a, b, c], [d, e, f], [g, h, i]] = m;
  const trace = a + e + i;
  if (trace >= Math.max(a, e, i)) return canonical(normalised([h - f, c - g, d - b, 1 + trace]));
  if (a >= e && a >= i) return canonical(normalised([1 + a - e - i, b + d, c + g, h - f]));
  if (e >= i) return canonical(normalised([b + d, 1 + e - a - i, f + h, c - g]));
  return canonical(normalised([c + g, f + h, 1 + i - a - e, d - b]));
}

function requireRotation(m: Readonly<Matrix3>): void {
  const dot = (j: number, k: number) => m[j]![0] * m[k]![0] + m[j]![1] * m[k]![1] + m[j]![2] * m[k]![2];
  const [[a, b, c], [d, e, f], [g, h, i]] = m;
  const determinant = a * (e * i - f * h) - b * (d * i - f * g) + c * (d * h - e * g);
  const pairs: [number, number][] = [[0, 0], [1, 1], [2, 2], [0, 1], [0, 2], [1, 2]];
  const square = pairs.every(([j, k]) => Math.abs(dot(j, k) - (j === k ? 1 : 0)) <= TOLERANCE);
  if (!square || !(determinant > 0)) {
    throw new NumericError('BAD_REQUEST', 'This matrix is not a rotation: its rows need to be unit vectors at right angles, right-handed.');
  }
}

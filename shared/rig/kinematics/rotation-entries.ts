import { NumericError } from '../numeric-error';
import type { Quat } from '../pose';

/**
 * Rotation matrix of a quaternion of any non-zero norm, row-major, written in place (hot loops keep one `out`).
 *
 * @throws NumericError BAD_REQUEST when q is zero or not finite
 */
export function rotationEntries(q: Readonly<Quat>, out: Float64Array): Float64Array {
  const [x, y, z, w] = q;
  const norm2 = x * x + y * y + z * z + w * w;
  if (!(norm2 > 0 && norm2 < Infinity)) {
    throw new NumericError('BAD_REQUEST', 'A rotation needs a finite quaternion that is not zero.');
  }
  const s = 2 / norm2;
  out[0] = 1 - s * (y * y + z * z);
  out[1] = s * (x * y - z * w);
  out[2] = s * (x * z + y * w);
  out[3] = s * (x * y + z * w);
  out[4] = 1 - s * (x * x + z * z);
  out[5] = s * (y * z - x * w);
  out[6] = s * (x * z - y * w);
  out[7] = s * (y * z + x * w);
  out[8] = 1 - s * (x * x + y * y);
  return out;
}

import type { Quat } from '../pose';

/** The quaternion of the same rotation with w > 0; half turns (w = 0) get a positive first non-zero entry. */
export function canonical(q: Readonly<Quat>): Quat {
  const [x, y, z, w] = q;
  const lead = w !== 0 ? w : x !== 0 ? x : y !== 0 ? y : z;
  return lead < 0 ? [-x, -y, -z, -w] : [x, y, z, w];
}

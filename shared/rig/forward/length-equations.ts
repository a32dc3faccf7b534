import type { RigModel } from '../rig-model';

/**
 * Memory of one evaluation; make it once per solver. Even the sum comes back in an array: a double that is returned from a
 * call costs an object, and this runs a thousand times a second for every device.
 */
export type LengthEquations = {
  /** 8 numbers a cable: its column of A, and e. */
  readonly W: Float64Array;
  /** Lower triangle of A A^T, 28 numbers, row after row. */
  readonly M: Float64Array;
  /** A e, 7 numbers, with e = length at the pose - length measured [m]. */
  readonly h: Float64Array;
  /** 1 number: sum of e^2 [m^2]; NaN or Infinity when a number is not finite or a cable has no length. */
  readonly sum: Float64Array;
};

export function createLengthEquations(cableCount: number): LengthEquations {
  return { W: new Float64Array(8 * cableCount), M: new Float64Array(28), h: new Float64Array(7), sum: new Float64Array(1) };
}

/**
 * Normal equations of the cable lengths at a pose, in two passes over the cables and without allocation.
 *
 * The step d (p [m], rotation vector in base axes [rad], grasp) that brings the lengths nearest solves A A^T d = A e,
 * because the lengths change by -A^T d.
 *
 * @param pose    x y z qx qy qz qw grasp; q of norm 1
 * @param lengths measured lengths [m], n numbers from `offset` on
 * @source Gauss-Newton on cable lengths (e.g. Pott 2010); columns of A as in `structureMatrix`
 */
export function lengthEquations(rig: RigModel, pose: Float64Array, lengths: ArrayLike<number>, offset: number, out: LengthEquations): void {
  const { exits, fixedPart, slidePart, cosPart, sinPart, hingeRatio, cableCount } = rig;
  const px = pose[0]!, py = pose[1]!, pz = pose[2]!;
  const x = pose[3]!, y = pose[4]!, z = pose[5]!, w = pose[6]!, g = pose[7]!;
  const R00 = 1 - 2 * (y * y + z * z), R01 = 2 * (x * y - z * w), R02 = 2 * (x * z + y * w);
  const R10 = 2 * (x * y + z * w), R11 = 1 - 2 * (x * x + z * z), R12 = 2 * (y * z - x * w);
  const R20 = 2 * (x * z - y * w), R21 = 2 * (y * z + x * w), R22 = 1 - 2 * (x * x + y * y);

  const { W } = out;
  // Cables of one body, and of jaws that open alike, share an angle: it is turned into sine and cosine once.
  let ratio = 0, cos = 1, sin = 0;

  for (let i = 0, k = 0; i < cableCount; i++, k += 3) {
    let dx = slidePart[k]!, dy = slidePart[k + 1]!, dz = slidePart[k + 2]!;
    let bx = fixedPart[k]! + g * dx, by = fixedPart[k + 1]! + g * dy, bz = fixedPart[k + 2]! + g * dz;
    const own = hingeRatio[i]!;
    if (own !== 0) {
      if (own === -ratio) sin = -sin;
      else if (own !== ratio) {
        cos = Math.cos(own * g);
        sin = Math.sin(own * g);
      }
      ratio = own;
      const cx = cosPart[k]!, cy = cosPart[k + 1]!, cz = cosPart[k + 2]!;
      const nx = sinPart[k]!, ny = sinPart[k + 1]!, nz = sinPart[k + 2]!;
      bx += cos * cx + sin * nx;
      by += cos * cy + sin * ny;
      bz += cos * cz + sin * nz;
      dx += own * (cos * nx - sin * cx);
      dy += own * (cos * ny - sin * cy);
      dz += own * (cos * nz - sin * cz);
    }

    const rx = R00 * bx + R01 * by + R02 * bz;
    const ry = R10 * bx + R11 * by + R12 * bz;
    const rz = R20 * bx + R21 * by + R22 * bz;
    const lx = exits[k]! - px - rx, ly = exits[k + 1]! - py - ry, lz = exits[k + 2]! - pz - rz;
    const length = Math.sqrt(lx * lx + ly * ly + lz * lz);
    const inverse = 1 / length;
    const a0 = lx * inverse, a1 = ly * inverse, a2 = lz * inverse;
    const a3 = ry * a2 - rz * a1, a4 = rz * a0 - rx * a2, a5 = rx * a1 - ry * a0;
    const a6 =
      (R00 * dx + R01 * dy + R02 * dz) * a0 + (R10 * dx + R11 * dy + R12 * dz) * a1 + (R20 * dx + R21 * dy + R22 * dz) * a2;
    const e = length - lengths[offset + i]!;

    const at = 8 * i;
    W[at] = a0; W[at + 1] = a1; W[at + 2] = a2; W[at + 3] = a3; W[at + 4] = a4; W[at + 5] = a5; W[at + 6] = a6; W[at + 7] = e;
  }
  addUp(cableCount, out);
}

/** Products of the columns. Apart from their making, because all of it at once is more than a processor's registers hold. */
function addUp(cableCount: number, { W, M, h, sum }: LengthEquations): void {
  let m00 = 0, h0 = 0;
  let m10 = 0, m11 = 0, h1 = 0;
  let m20 = 0, m21 = 0, m22 = 0, h2 = 0;
  let m30 = 0, m31 = 0, m32 = 0, m33 = 0, h3 = 0;
  let m40 = 0, m41 = 0, m42 = 0, m43 = 0, m44 = 0, h4 = 0;
  let m50 = 0, m51 = 0, m52 = 0, m53 = 0, m54 = 0, m55 = 0, h5 = 0;
  let m60 = 0, m61 = 0, m62 = 0, m63 = 0, m64 = 0, m65 = 0, m66 = 0, h6 = 0;
  let squares = 0;
  for (let at = 0, end = 8 * cableCount; at < end; at += 8) {
    const a0 = W[at]!, a1 = W[at + 1]!, a2 = W[at + 2]!, a3 = W[at + 3]!, a4 = W[at + 4]!, a5 = W[at + 5]!, a6 = W[at + 6]!, e = W[at + 7]!;
    squares += e * e;
    m00 += a0 * a0; h0 += a0 * e;
    m10 += a1 * a0; m11 += a1 * a1; h1 += a1 * e;
    m20 += a2 * a0; m21 += a2 * a1; m22 += a2 * a2; h2 += a2 * e;
    m30 += a3 * a0; m31 += a3 * a1; m32 += a3 * a2; m33 += a3 * a3; h3 += a3 * e;
    m40 += a4 * a0; m41 += a4 * a1; m42 += a4 * a2; m43 += a4 * a3; m44 += a4 * a4; h4 += a4 * e;
    m50 += a5 * a0; m51 += a5 * a1; m52 += a5 * a2; m53 += a5 * a3; m54 += a5 * a4; m55 += a5 * a5; h5 += a5 * e;
    m60 += a6 * a0; m61 += a6 * a1; m62 += a6 * a2; m63 += a6 * a3; m64 += a6 * a4; m65 += a6 * a5; m66 += a6 * a6; h6 += a6 * e;
  }
  M[0] = m00; h[0] = h0;
  M[1] = m10; M[2] = m11; h[1] = h1;
  M[3] = m20; M[4] = m21; M[5] = m22; h[2] = h2;
  M[6] = m30; M[7] = m31; M[8] = m32; M[9] = m33; h[3] = h3;
  M[10] = m40; M[11] = m41; M[12] = m42; M[13] = m43; M[14] = m44; h[4] = h4;
  M[15] = m50; M[16] = m51; M[17] = m52; M[18] = m53; M[19] = m54; M[20] = m55; h[5] = h5;
  M[21] = m60; M[22] = m61; M[23] = m62; M[24] = m63; M[25] = m64; M[26] = m65; M[27] = m66; h[6] = h6;
  // A cable without length has no unit vector: these entries are then not numbers, while its error still is one.
  sum[0] = m00 + m11 + m22 > 0 ? squares : Number.NaN;
}

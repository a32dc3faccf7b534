import type { RigModel } from '../rig-model';

/**
 * Adds sum e_i Hess(length_i) to the normal matrix of `lengthEquations`: Gauss-Newton becomes Newton.
 *
 * Where a residual stays (a slipped cable) and the rig resists some motion little, Gauss-Newton steps circle round the
 * minimum for ever, because they leave this term out. With c the cable vector, a column of A and l the length,
 * Hess(l) = (Dc^T Dc - a a^T) / l + u . D2c, in the coordinates of a step: p, rotation vector in base axes, grasp.
 *
 * @param pose    x y z qx qy qz qw grasp; q of norm 1
 * @param lengths measured lengths [m], n numbers from `offset` on
 * @param M       lower triangle, 28 numbers, row after row; changed in place, without allocation
 * @source full Newton for least squares with a residual, Dennis and Schnabel 1983 (cited from memory); derivatives by
 *         hand, compared with differences in the tests
 */
export function addLengthCurvature(rig: RigModel, pose: Float64Array, lengths: ArrayLike<number>, offset: number, M: Float64Array): void {
  const { exits, fixedPart, slidePart, cosPart, sinPart, hingeRatio, cableCount } = rig;
  const x = pose[3]!, y = pose[4]!, z = pose[5]!, w = pose[6]!, g = pose[7]!;
  const R00 = 1 - 2 * (y * y + z * z), R01 = 2 * (x * y - z * w), R02 = 2 * (x * z + y * w);
  const R10 = 2 * (x * y + z * w), R11 = 1 - 2 * (x * x + z * z), R12 = 2 * (y * z - x * w);
  const R20 = 2 * (x * z - y * w), R21 = 2 * (y * z + x * w), R22 = 1 - 2 * (x * x + y * y);

  for (let i = 0, k = 0; i < cableCount; i++, k += 3) {
    const ratio = hingeRatio[i]!;
    const cos = Math.cos(ratio * g), sin = Math.sin(ratio * g);
    const sx = slidePart[k]!, sy = slidePart[k + 1]!, sz = slidePart[k + 2]!;
    const cx = cosPart[k]!, cy = cosPart[k + 1]!, cz = cosPart[k + 2]!;
    const nx = sinPart[k]!, ny = sinPart[k + 1]!, nz = sinPart[k + 2]!;
    // attachment b, db/dg and d2b/dg2 in the palm frame; r, v and f are the same in base axes
    const tx = cos * cx + sin * nx, ty = cos * cy + sin * ny, tz = cos * cz + sin * nz;
    const bx = fixedPart[k]! + g * sx + tx, by = fixedPart[k + 1]! + g * sy + ty, bz = fixedPart[k + 2]! + g * sz + tz;
    const dx = sx + ratio * (cos * nx - sin * cx), dy = sy + ratio * (cos * ny - sin * cy), dz = sz + ratio * (cos * nz - sin * cz);
    const rx = R00 * bx + R01 * by + R02 * bz, ry = R10 * bx + R11 * by + R12 * bz, rz = R20 * bx + R21 * by + R22 * bz;
    const vx = R00 * dx + R01 * dy + R02 * dz, vy = R10 * dx + R11 * dy + R12 * dz, vz = R20 * dx + R21 * dy + R22 * dz;
    const turn2 = -ratio * ratio;
    const fx = turn2 * (R00 * tx + R01 * ty + R02 * tz), fy = turn2 * (R10 * tx + R11 * ty + R12 * tz), fz = turn2 * (R20 * tx + R21 * ty + R22 * tz);

    const lx = exits[k]! - pose[0]! - rx, ly = exits[k + 1]! - pose[1]! - ry, lz = exits[k + 2]! - pose[2]! - rz;
    const length = Math.sqrt(lx * lx + ly * ly + lz * lz);
    const e = length - lengths[offset + i]!;
    const c = e / length;
    const a0 = lx / length, a1 = ly / length, a2 = lz / length;
    const a3 = ry * a2 - rz * a1, a4 = rz * a0 - rx * a2, a5 = rx * a1 - ry * a0;
    const a6 = vx * a0 + vy * a1 + vz * a2;
    const r2 = rx * rx + ry * ry + rz * rz;
    const ur = rx * a0 + ry * a1 + rz * a2;

    // position with position
    M[0] = M[0]! + c * (1 - a0 * a0);
    M[1] = M[1]! - c * a1 * a0;
    M[2] = M[2]! + c * (1 - a1 * a1);
    M[3] = M[3]! - c * a2 * a0;
    M[4] = M[4]! - c * a2 * a1;
    M[5] = M[5]! + c * (1 - a2 * a2);
    // rotation with position
    M[6] = M[6]! - c * a3 * a0;
    M[7] = M[7]! + c * (-rz - a3 * a1);
    M[8] = M[8]! + c * (ry - a3 * a2);
    M[10] = M[10]! + c * (rz - a4 * a0);
    M[11] = M[11]! - c * a4 * a1;
    M[12] = M[12]! + c * (-rx - a4 * a2);
    M[15] = M[15]! + c * (-ry - a5 * a0);
    M[16] = M[16]! + c * (rx - a5 * a1);
    M[17] = M[17]! - c * a5 * a2;
    // rotation with rotation
    M[9] = M[9]! + c * (r2 - rx * rx - a3 * a3) + e * (ur - a0 * rx);
    M[13] = M[13]! + c * (-rx * ry - a4 * a3) - 0.5 * e * (a0 * ry + a1 * rx);
    M[14] = M[14]! + c * (r2 - ry * ry - a4 * a4) + e * (ur - a1 * ry);
    M[18] = M[18]! + c * (-rx * rz - a5 * a3) - 0.5 * e * (a0 * rz + a2 * rx);
    M[19] = M[19]! + c * (-ry * rz - a5 * a4) - 0.5 * e * (a1 * rz + a2 * ry);
    M[20] = M[20]! + c * (r2 - rz * rz - a5 * a5) + e * (ur - a2 * rz);
    // grasp with everything
    M[21] = M[21]! + c * (vx - a6 * a0);
    M[22] = M[22]! + c * (vy - a6 * a1);
    M[23] = M[23]! + c * (vz - a6 * a2);
    M[24] = M[24]! + c * (ry * vz - rz * vy - a6 * a3) - e * (vy * a2 - vz * a1);
    M[25] = M[25]! + c * (rz * vx - rx * vz - a6 * a4) - e * (vz * a0 - vx * a2);
    M[26] = M[26]! + c * (rx * vy - ry * vx - a6 * a5) - e * (vx * a1 - vy * a0);
    M[27] = M[27]! + c * (vx * vx + vy * vy + vz * vz - a6 * a6) - e * (fx * a0 + fy * a1 + fz * a2);
  }
}

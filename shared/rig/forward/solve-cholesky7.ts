/**
 * Solves M x = h for a symmetric positive definite 7 x 7 matrix by Cholesky, all in scalars: the inner loop of
 * forward kinematics, where a general routine would cost more than the rest.
 *
 * @param M 28 numbers: lower triangle, row after row (11, 21, 22, 31, ...); not changed
 * @param h 7 numbers, replaced by x
 * @param damping share of each diagonal entry that is added to it; no unit
 * @param floor   added to each diagonal entry times `damping`, so that an empty row is damped too
 * @returns smallest pivot (root of the reduced diagonal, unit of sqrt(M)); 0 when M is not positive definite to
 *          rounding, and then h is not changed
 * @source Cholesky (Benoit 1924); the scalar form is written out here
 */
export function solveCholesky7(M: Float64Array, h: Float64Array, damping: number, floor: number): number {
  const grow = 1 + damping;
  const lift = damping * floor;

  const a00 = M[0]!, a11 = M[2]!, a22 = M[5]!, a33 = M[9]!, a44 = M[14]!, a55 = M[20]!, a66 = M[27]!;
  const tiny = TINY_PIVOT * Math.max(a00, a11, a22, a33, a44, a55, a66);

  let d = a00 * grow + lift;
  if (!(d > tiny)) return 0;
  const l00 = Math.sqrt(d), i0 = 1 / l00;
  const l10 = M[1]! * i0, l20 = M[3]! * i0, l30 = M[6]! * i0, l40 = M[10]! * i0, l50 = M[15]! * i0, l60 = M[21]! * i0;

  d = a11 * grow + lift - l10 * l10;
  if (!(d > tiny)) return 0;
  const l11 = Math.sqrt(d), i1 = 1 / l11;
  const l21 = (M[4]! - l20 * l10) * i1, l31 = (M[7]! - l30 * l10) * i1, l41 = (M[11]! - l40 * l10) * i1;
  const l51 = (M[16]! - l50 * l10) * i1, l61 = (M[22]! - l60 * l10) * i1;

  d = a22 * grow + lift - l20 * l20 - l21 * l21;
  if (!(d > tiny)) return 0;
  const l22 = Math.sqrt(d), i2 = 1 / l22;
  const l32 = (M[8]! - l30 * l20 - l31 * l21) * i2, l42 = (M[12]! - l40 * l20 - l41 * l21) * i2;
  const l52 = (M[17]! - l50 * l20 - l51 * l21) * i2, l62 = (M[23]! - l60 * l20 - l61 * l21) * i2;

  d = a33 * grow + lift - l30 * l30 - l31 * l31 - l32 * l32;
  if (!(d > tiny)) return 0;
  const l33 = Math.sqrt(d), i3 = 1 / l33;
  const l43 = (M[13]! - l40 * l30 - l41 * l31 - l42 * l32) * i3;
  const l53 = (M[18]! - l50 * l30 - l51 * l31 - l52 * l32) * i3;
  const l63 = (M[24]! - l60 * l30 - l61 * l31 - l62 * l32) * i3;

  d = a44 * grow + lift - l40 * l40 - l41 * l41 - l42 * l42 - l43 * l43;
  if (!(d > tiny)) return 0;
  const l44 = Math.sqrt(d), i4 = 1 / l44;
  const l54 = (M[19]! - l50 * l40 - l51 * l41 - l52 * l42 - l53 * l43) * i4;
  const l64 = (M[25]! - l60 * l40 - l61 * l41 - l62 * l42 - l63 * l43) * i4;

  d = a55 * grow + lift - l50 * l50 - l51 * l51 - l52 * l52 - l53 * l53 - l54 * l54;
  if (!(d > tiny)) return 0;
  const l55 = Math.sqrt(d), i5 = 1 / l55;
  const l65 = (M[26]! - l60 * l50 - l61 * l51 - l62 * l52 - l63 * l53 - l64 * l54) * i5;

  d = a66 * grow + lift - l60 * l60 - l61 * l61 - l62 * l62 - l63 * l63 - l64 * l64 - l65 * l65;
  if (!(d > tiny)) return 0;
  const l66 = Math.sqrt(d), i6 = 1 / l66;

  const y0 = h[0]! * i0;
  const y1 = (h[1]! - l10 * y0) * i1;
  const y2 = (h[2]! - l20 * y0 - l21 * y1) * i2;
  const y3 = (h[3]! - l30 * y0 - l31 * y1 - l32 * y2) * i3;
  const y4 = (h[4]! - l40 * y0 - l41 * y1 - l42 * y2 - l43 * y3) * i4;
  const y5 = (h[5]! - l50 * y0 - l51 * y1 - l52 * y2 - l53 * y3 - l54 * y4) * i5;
  const y6 = (h[6]! - l60 * y0 - l61 * y1 - l62 * y2 - l63 * y3 - l64 * y4 - l65 * y5) * i6;

  const x6 = y6 * i6;
  const x5 = (y5 - l65 * x6) * i5;
  const x4 = (y4 - l54 * x5 - l64 * x6) * i4;
  const x3 = (y3 - l43 * x4 - l53 * x5 - l63 * x6) * i3;
  const x2 = (y2 - l32 * x3 - l42 * x4 - l52 * x5 - l62 * x6) * i2;
  const x1 = (y1 - l21 * x2 - l31 * x3 - l41 * x4 - l51 * x5 - l61 * x6) * i1;
  const x0 = (y0 - l10 * x1 - l20 * x2 - l30 * x3 - l40 * x4 - l50 * x5 - l60 * x6) * i0;
  h[0] = x0;
  h[1] = x1;
  h[2] = x2;
  h[3] = x3;
  h[4] = x4;
  h[5] = x5;
  h[6] = x6;
  return Math.min(l00, l11, l22, l33, l44, l55, l66);
}

/** Share of the largest diagonal entry below which a pivot is rounding. No unit. */
const TINY_PIVOT = 1e-14;

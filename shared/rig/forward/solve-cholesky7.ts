/** What a solution may add to the matrix and what it says of it; in one array, because numbers in and out of a call cost objects. */
export const DAMPING = 0;
export const FLOOR = 1;
export const PIVOT = 2;

/**
 * Solves M x = h for a symmetric positive definite 7 x 7 matrix by Cholesky without roots (M = L D L^T), all in
 * scalars: the inner loop of forward kinematics, where a general routine would cost more than the rest.
 *
 * @param M     28 numbers: lower triangle, row after row (11, 21, 22, 31, ...); not changed
 * @param h     7 numbers, replaced by x
 * @param terms in: [DAMPING] share of each diagonal entry that is added to it; [FLOOR] added to each times the damping, so
 *              that an empty row is damped too. Out: [PIVOT] smallest root of a reduced diagonal entry, unit of sqrt(M)
 * @returns false when M is not positive definite to rounding; h is then not changed
 * @source Cholesky (Benoit 1924); the scalar form is written out here
 */
export function solveCholesky7(M: Float64Array, h: Float64Array, terms: Float64Array): boolean {
  const damping = terms[DAMPING]!;
  const grow = 1 + damping;
  const lift = damping * terms[FLOOR]!;

  const a00 = M[0]!, a11 = M[2]!, a22 = M[5]!, a33 = M[9]!, a44 = M[14]!, a55 = M[20]!, a66 = M[27]!;
  const tiny = TINY_PIVOT * Math.max(a00, a11, a22, a33, a44, a55, a66);

  const d0 = a00 * grow + lift;
  if (!(d0 > tiny)) return false;
  const i0 = 1 / d0;
  const v10 = M[1]!, v20 = M[3]!, v30 = M[6]!, v40 = M[10]!, v50 = M[15]!, v60 = M[21]!;
  const l10 = v10 * i0, l20 = v20 * i0, l30 = v30 * i0, l40 = v40 * i0, l50 = v50 * i0, l60 = v60 * i0;

  const d1 = a11 * grow + lift - l10 * v10;
  if (!(d1 > tiny)) return false;
  const i1 = 1 / d1;
  const v21 = M[4]! - l20 * v10, v31 = M[7]! - l30 * v10, v41 = M[11]! - l40 * v10, v51 = M[16]! - l50 * v10, v61 = M[22]! - l60 * v10;
  const l21 = v21 * i1, l31 = v31 * i1, l41 = v41 * i1, l51 = v51 * i1, l61 = v61 * i1;

  const d2 = a22 * grow + lift - l20 * v20 - l21 * v21;
  if (!(d2 > tiny)) return false;
  const i2 = 1 / d2;
  const v32 = M[8]! - l30 * v20 - l31 * v21, v42 = M[12]! - l40 * v20 - l41 * v21, v52 = M[17]! - l50 * v20 - l51 * v21;
  const v62 = M[23]! - l60 * v20 - l61 * v21;
  const l32 = v32 * i2, l42 = v42 * i2, l52 = v52 * i2, l62 = v62 * i2;

  const d3 = a33 * grow + lift - l30 * v30 - l31 * v31 - l32 * v32;
  if (!(d3 > tiny)) return false;
  const i3 = 1 / d3;
  const v43 = M[13]! - l40 * v30 - l41 * v31 - l42 * v32, v53 = M[18]! - l50 * v30 - l51 * v31 - l52 * v32;
  const v63 = M[24]! - l60 * v30 - l61 * v31 - l62 * v32;
  const l43 = v43 * i3, l53 = v53 * i3, l63 = v63 * i3;

  const d4 = a44 * grow + lift - l40 * v40 - l41 * v41 - l42 * v42 - l43 * v43;
  if (!(d4 > tiny)) return false;
  const i4 = 1 / d4;
  const v54 = M[19]! - l50 * v40 - l51 * v41 - l52 * v42 - l53 * v43, v64 = M[25]! - l60 * v40 - l61 * v41 - l62 * v42 - l63 * v43;
  const l54 = v54 * i4, l64 = v64 * i4;

  const d5 = a55 * grow + lift - l50 * v50 - l51 * v51 - l52 * v52 - l53 * v53 - l54 * v54;
  if (!(d5 > tiny)) return false;
  const i5 = 1 / d5;
  const v65 = M[26]! - l60 * v50 - l61 * v51 - l62 * v52 - l63 * v53 - l64 * v54;
  const l65 = v65 * i5;

  const d6 = a66 * grow + lift - l60 * v60 - l61 * v61 - l62 * v62 - l63 * v63 - l64 * v64 - l65 * v65;
  if (!(d6 > tiny)) return false;
  const i6 = 1 / d6;

  const y0 = h[0]!;
  const y1 = h[1]! - l10 * y0;
  const y2 = h[2]! - l20 * y0 - l21 * y1;
  const y3 = h[3]! - l30 * y0 - l31 * y1 - l32 * y2;
  const y4 = h[4]! - l40 * y0 - l41 * y1 - l42 * y2 - l43 * y3;
  const y5 = h[5]! - l50 * y0 - l51 * y1 - l52 * y2 - l53 * y3 - l54 * y4;
  const y6 = h[6]! - l60 * y0 - l61 * y1 - l62 * y2 - l63 * y3 - l64 * y4 - l65 * y5;

  const x6 = y6 * i6;
  const x5 = y5 * i5 - l65 * x6;
  const x4 = y4 * i4 - l54 * x5 - l64 * x6;
  const x3 = y3 * i3 - l43 * x4 - l53 * x5 - l63 * x6;
  const x2 = y2 * i2 - l32 * x3 - l42 * x4 - l52 * x5 - l62 * x6;
  const x1 = y1 * i1 - l21 * x2 - l31 * x3 - l41 * x4 - l51 * x5 - l61 * x6;
  const x0 = y0 * i0 - l10 * x1 - l20 * x2 - l30 * x3 - l40 * x4 - l50 * x5 - l60 * x6;
  h[0] = x0; h[1] = x1; h[2] = x2; h[3] = x3; h[4] = x4; h[5] = x5; h[6] = x6;
  terms[PIVOT] = Math.sqrt(Math.min(d0, d1, d2, d3, d4, d5, d6));
  return true;
}

/** Share of the largest diagonal entry below which a pivot is rounding. No unit. */
const TINY_PIVOT = 1e-14;

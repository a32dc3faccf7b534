const SQRT2 = Math.SQRT2;
const TWO_OVER_SQRT_PI = 2 / Math.sqrt(Math.PI);
const SQRT_TWO_PI = Math.sqrt(2 * Math.PI);

/**
 * Complementary error function, good to about 1e-13 of its value down to the smallest double.
 *
 * @source series DLMF 7.6.2 below 2, continued fraction DLMF 7.9.3 above
 */
export function complementaryError(x: number): number {
  if (x < 0) return 2 - complementaryError(-x);
  if (x < 2) {
    let term = x;
    let sum = x;
    for (let n = 1; term > sum * 1e-17; n++) {
      term *= (2 * x * x) / (2 * n + 1);
      sum += term;
    }
    return 1 - TWO_OVER_SQRT_PI * Math.exp(-x * x) * sum;
  }
  let fraction = x;
  for (let n = 50; n >= 1; n--) fraction = x + n / 2 / fraction;
  return Math.exp(-x * x) / (Math.sqrt(Math.PI) * fraction);
}

/** Probability that a standard normal value is at most z. */
export function normalCumulative(z: number): number {
  return 0.5 * complementaryError(-z / SQRT2);
}

/** Probability that a standard normal value is at least |z| away from 0, kept exact in the tails. */
export function normalTwoSided(z: number): number {
  return complementaryError(Math.abs(z) / SQRT2);
}

/**
 * Standard normal value below which the given share lies, by Newton steps on the cumulative from a bracketed start.
 *
 * @param share above 0 and below 1
 * @example normalQuantile(0.975) // 1.959963984540054
 */
export function normalQuantile(share: number): number {
  if (share === 0.5) return 0;
  if (share > 0.5) return -normalQuantile(1 - share);
  let low = -39;
  let high = 0;
  let z = Math.max(low, -Math.sqrt(-2 * Math.log(2 * share)));
  for (let step = 0; step < 200; step++) {
    const excess = normalCumulative(z) - share;
    if (excess > 0) high = z;
    else low = z;
    const density = Math.exp((-z * z) / 2) / SQRT_TWO_PI;
    let next = z - excess / density;
    if (!(next > low && next < high)) next = (low + high) / 2;
    if (Math.abs(next - z) <= 4 * Number.EPSILON * Math.abs(z)) return next;
    z = next;
  }
  return z;
}

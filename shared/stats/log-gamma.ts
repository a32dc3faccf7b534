const HALF_LOG_TWO_PI = 0.9189385332046728;

/**
 * What Stirling's leading term leaves of ln Gamma(x), for x >= 10: below 1e-15 off.
 *
 * @source Stirling series, DLMF 5.11.1
 */
export function stirlingCorrection(x: number): number {
  const r = 1 / (x * x);
  const tail = 1 / 1260 - r * (1 / 1680 - r * (1 / 1188 - r * (691 / 360360 - r / 156)));
  return (1 / 12 - r * (1 / 360 - r * tail)) / x;
}

/**
 * Natural logarithm of the gamma function for x > 0, by the recurrence up to 10 and Stirling's series from there.
 *
 * @source DLMF 5.5.1 and 5.11.1
 * @example logGamma(5) // ln 24 = 3.178053830347946
 */
export function logGamma(x: number): number {
  let product = 1;
  let shifted = x;
  while (shifted < 10) {
    product *= shifted;
    shifted += 1;
  }
  return (shifted - 0.5) * Math.log(shifted) - shifted + HALF_LOG_TWO_PI + stirlingCorrection(shifted) - Math.log(product);
}

/**
 * ln B(a, b) without the cancellation of three large logarithms, so that it keeps its digits at a million degrees of freedom.
 *
 * @source DLMF 5.12.1 with Stirling's series; the arrangement of Didonato and Morris 1992
 */
export function logBeta(a: number, b: number): number {
  const p = Math.min(a, b);
  const q = Math.max(a, b);
  const share = p / (p + q);
  if (p >= 10) {
    const correction = stirlingCorrection(p) + stirlingCorrection(q) - stirlingCorrection(p + q);
    return HALF_LOG_TWO_PI - 0.5 * Math.log(q) + correction + (p - 0.5) * Math.log(share) + q * Math.log1p(-share);
  }
  if (q >= 10) {
    const correction = stirlingCorrection(q) - stirlingCorrection(p + q);
    return logGamma(p) + correction + p - p * Math.log(p + q) + (q - 0.5) * Math.log1p(-share);
  }
  return logGamma(p) + logGamma(q) - logGamma(p + q);
}

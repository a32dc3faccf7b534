import { logGamma } from './log-gamma';
import { normalCumulative } from './normal-distribution';

const FEWEST_PANELS = 800;
const MOST_PANELS = 20_000;

/**
 * Probability that the non-central t with the given degrees of freedom and non-centrality is at most t.
 *
 * Integrates the definition: the normal part given the scale s, over the chi density of s, by Simpson's rule over the range
 * where that density is above 1e-17 of its top.
 *
 * @source Johnson and Welch 1940 (definition); quadrature our own
 */
export function noncentralCumulative(t: number, degrees: number, noncentrality: number): number {
  const halfWidth = 9 / Math.sqrt(degrees);
  const from = Math.max(0, 1 - halfWidth);
  const to = 1 + halfWidth;
  // The normal part is a step of width 1/|t| in s: the panels must be finer than that.
  const panels = 2 * Math.ceil(Math.min(MOST_PANELS, Math.max(FEWEST_PANELS, 5 * (to - from) * Math.abs(t))) / 2);
  const step = (to - from) / panels;
  const logNorm = Math.LN2 + (degrees / 2) * Math.log(degrees / 2) - logGamma(degrees / 2);
  let sum = 0;
  for (let i = 0; i <= panels; i++) {
    const s = from + i * step;
    const powered = s > 0 ? (degrees - 1) * Math.log(s) : degrees === 1 ? 0 : -Infinity;
    const density = Math.exp(logNorm + powered - (degrees * s * s) / 2);
    const weight = i === 0 || i === panels ? 1 : i % 2 === 1 ? 4 : 2;
    sum += weight * density * normalCumulative(t * s - noncentrality);
  }
  return (sum * step) / 3;
}

/**
 * The non-centralities between which the true one lies with the given confidence, having seen t.
 *
 * @returns [low, high], found by bisection: the t seen sits at the upper tail of low and at the lower tail of high
 * @source Steiger and Fouladi 1997 (interval by inversion of the non-central t)
 */
export function noncentralityInterval(t: number, degrees: number, confidence: number): [number, number] {
  const tail = (1 - confidence) / 2;
  return [solve(t, degrees, 1 - tail), solve(t, degrees, tail)];
}

function solve(t: number, degrees: number, share: number): number {
  // The cumulative falls as the non-centrality rises.
  let reach = 4 + Math.abs(t);
  while (noncentralCumulative(t, degrees, t - reach) < share || noncentralCumulative(t, degrees, t + reach) > share) reach *= 2;
  let low = t - reach;
  let high = t + reach;
  for (let step = 0; step < 80 && high - low > 1e-13 * reach; step++) {
    const middle = (low + high) / 2;
    if (noncentralCumulative(t, degrees, middle) > share) low = middle;
    else high = middle;
  }
  return (low + high) / 2;
}

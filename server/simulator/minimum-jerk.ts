/**
 * The minimum-jerk course of a reach: part of the way covered at part of the time.
 *
 * s(tau) = 10 tau^3 - 15 tau^4 + 6 tau^5 for tau in [0, 1], at rest at both ends. Its peak speed is 1.875 times the mean,
 * at half time.
 *
 * @source Flash and Hogan 1985
 */
export type Progress = { s: number; rate: number; bend: number };

/**
 * @param tau part of the time, clamped to [0, 1]
 * @param out s without unit, `rate` = ds/dtau, `bend` = d2s/dtau2; written in place
 */
export function minimumJerk(tau: number, out: Progress): Progress {
  if (tau <= 0 || tau >= 1) {
    out.s = tau <= 0 ? 0 : 1;
    out.rate = 0;
    out.bend = 0;
    return out;
  }
  const rest = 1 - tau;
  out.s = tau * tau * tau * (10 + tau * (6 * tau - 15));
  out.rate = 30 * tau * tau * rest * rest;
  out.bend = 60 * tau * rest * (1 - 2 * tau);
  return out;
}

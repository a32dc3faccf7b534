/**
 * Sampling rate of a stretch of samples, Hz, from its times alone: the mean of the steps that are no gaps (1.5 times the
 * median or less), brought to a whole number of hertz when it lies within a thousandth of one, as clocks drift.
 *
 * @param timesUs strictly rising; the first second or two of a recording is enough
 * @returns null for fewer than two samples
 */
export function nominalRate(timesUs: Float64Array, count: number): number | null {
  if (count < 2) return null;
  const steps = Float64Array.from({ length: count - 1 }, (_, i) => (timesUs[i + 1] as number) - (timesUs[i] as number));
  const median = steps.slice().sort()[(steps.length - 1) >>> 1] as number;
  const regular = steps.filter((step) => step <= 1.5 * median);
  const rate = (1e6 * regular.length) / regular.reduce((sum, step) => sum + step, 0);
  const whole = Math.round(rate);
  return whole > 0 && Math.abs(rate - whole) <= 1e-3 * whole ? whole : Math.round(rate * 1e3) / 1e3;
}

/**
 * Speed of the hand from positions: the difference of two neighbouring means over the time between them.
 *
 * The mean position of the 20 ms after a sample minus that of the 20 ms before it, over the time between the two means. This is
 * a first difference behind two moving averages; its gain is the product of their sincs, so 8-12 Hz tremor passes (0.79 at
 * 10 Hz) and sensor noise does not. Over buckets that are wider than 20 ms the means of neighbouring buckets stand in
 * and the speed is that of the averaged path, which is lower than the true one; the ribbon says so. Common practice,
 * no source. Not a number where the window meets a gap.
 */
import { GAP_PERIODS } from '../find-moment';
import type { Stretch } from '../stretch';

export const SPEED_WINDOW_S = 0.02;

/** @returns m/s, one per sample or bucket of the stretch */
export function handSpeed(stretch: Stretch, position: readonly number[], rateHz: number): Float32Array {
  return stretch.level === 'samples' ? overSamples(stretch, position, rateHz) : overBuckets(stretch, position, rateHz);
}

function overSamples(stretch: Stretch, position: readonly number[], rateHz: number): Float32Array {
  const { count, startsS, mean } = stretch;
  const speed = new Float32Array(count).fill(Number.NaN);
  const half = Math.max(1, Math.round(SPEED_WINDOW_S * rateHz));
  const sums = position.map((channel) => prefixSums(mean, channel * count, count));
  const times = prefixSums(startsS, 0, count);
  const broken = breaksIn(stretch, position, GAP_PERIODS / rateHz);
  for (let i = 0; i < count; i += 1) {
    const h = Math.min(half, i + 1, count - i);
    const [a, m, b] = [i - h + 1, i + 1, i + h];
    // The two windows are [a, m) and [m, b); the sample itself closes the first.
    const last = Math.min(count, b);
    if (last - m < 1) continue;
    if (broken(a, last)) continue;
    const before = m - a;
    const after = last - m;
    let squares = 0;
    for (const sum of sums) {
      const delta = difference(sum, m, last) / after - difference(sum, a, m) / before;
      squares += delta * delta;
    }
    const elapsed = difference(times, m, last) / after - difference(times, a, m) / before;
    if (elapsed > 0) speed[i] = Math.sqrt(squares) / elapsed;
  }
  return speed;
}

function overBuckets(stretch: Stretch, position: readonly number[], rateHz: number): Float32Array {
  const { count, startsS, endsS, mean } = stretch;
  const speed = new Float32Array(count).fill(Number.NaN);
  const middle = (i: number) => ((startsS[i] ?? 0) + (endsS[i] ?? 0)) / 2;
  for (let i = 1; i < count - 1; i += 1) {
    const apart = (startsS[i + 1] ?? 0) - (endsS[i - 1] ?? 0) - ((endsS[i] ?? 0) - (startsS[i] ?? 0));
    if (apart > (2 * GAP_PERIODS) / rateHz) continue;
    // Over one bucket to each side; a noise-free central difference of the averaged path.
    const elapsed = middle(i + 1) - middle(i - 1);
    let squares = 0;
    for (const channel of position) {
      const delta = (mean[channel * count + i + 1] ?? Number.NaN) - (mean[channel * count + i - 1] ?? Number.NaN);
      squares += delta * delta;
    }
    if (elapsed > 0) speed[i] = Math.sqrt(squares) / elapsed;
  }
  if (count > 2) {
    speed[0] = speed[1] ?? Number.NaN;
    speed[count - 1] = speed[count - 2] ?? Number.NaN;
  }
  return speed;
}

/** Sums before each index, so that any mean costs two reads; double precision, because positions are millimetres beside metres. */
function prefixSums(values: Float32Array | Float64Array, offset: number, count: number): Float64Array {
  const sums = new Float64Array(count + 1);
  for (let i = 0; i < count; i += 1) {
    const value = values[offset + i] ?? 0;
    // A hole adds nothing here; the windows that meet it are left out by `breaksIn`.
    sums[i + 1] = (sums[i] ?? 0) + (Number.isFinite(value) ? value : 0);
  }
  return sums;
}

const difference = (sums: Float64Array, from: number, to: number): number => (sums[to] ?? 0) - (sums[from] ?? 0);

/** Tells whether a hole or a time step longer than a gap lies inside the samples [from, to). */
function breaksIn({ count, startsS, mean }: Stretch, position: readonly number[], longestS: number): (from: number, to: number) => boolean {
  const steps = new Int32Array(count + 1);
  const holes = new Int32Array(count + 1);
  for (let i = 0; i < count; i += 1) {
    const step = i > 0 ? (startsS[i] ?? 0) - (startsS[i - 1] ?? 0) : 0;
    // A break counted at i lies between i - 1 and i.
    steps[i + 1] = (steps[i] ?? 0) + (step > longestS ? 1 : 0);
    const measured = position.every((channel) => Number.isFinite(mean[channel * count + i] ?? Number.NaN));
    holes[i + 1] = (holes[i] ?? 0) + (measured ? 0 : 1);
  }
  return (from, to) => (steps[to] ?? 0) > (steps[from + 1] ?? 0) || (holes[to] ?? 0) > (holes[from] ?? 0);
}

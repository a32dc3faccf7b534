import { NumericError } from '../rig/numeric-error';
import { normalCumulative, normalQuantile } from './normal-distribution';
import { quantile } from './quantile';
import { requireSample } from './require-sample';
import { seededRandom } from './seeded-random';

export interface BootstrapOptions {
  /** Written beside the result, so that anyone gets the same interval. */
  readonly seed: number;
  /** Resamples drawn; 10 000 by default. */
  readonly resamples?: number;
  /** Share, 0.95 by default. */
  readonly confidence?: number;
  /** `percentile`, or `bca` (default): corrected for bias and skew. */
  readonly method?: 'percentile' | 'bca';
}

export interface BootstrapInterval {
  readonly estimate: number;
  readonly interval: [number, number];
  readonly method: 'percentile' | 'bca';
  readonly seed: number;
  readonly resamples: number;
}

/**
 * Bootstrap interval of any statistic of one sample (of participants: resample what is independent).
 *
 * @param values    sample of two or more
 * @param statistic function of a sample; it must give a finite number for every resample
 * @throws NumericError TOO_SHORT below two values, UNDEFINED when the statistic fails on a resample, BAD_REQUEST for impossible options
 * @source Efron 1979 (percentile), Efron 1987 (BCa, acceleration by jackknife)
 */
export function bootstrapInterval(
  values: ArrayLike<number>,
  statistic: (sample: Float64Array) => number,
  options: BootstrapOptions,
): BootstrapInterval {
  requireSample(values, 2, 'The sample');
  const { seed, resamples = 10_000, confidence = 0.95, method = 'bca' } = options;
  if (!(confidence > 0 && confidence < 1) || !Number.isInteger(resamples) || resamples < 100) {
    throw new NumericError('BAD_REQUEST', 'Confidence lies between 0 and 1, and at least 100 resamples are drawn.');
  }
  const sample = Float64Array.from(values);
  const estimate = finite(statistic(sample));
  const random = seededRandom(seed);
  const drawn = new Float64Array(sample.length);
  const results = new Float64Array(resamples);
  for (let r = 0; r < resamples; r++) {
    for (let i = 0; i < drawn.length; i++) drawn[i] = sample[random.below(sample.length)] as number;
    results[r] = finite(statistic(drawn));
  }
  results.sort();
  const tail = (1 - confidence) / 2;
  const shares = method === 'bca' ? correctedShares(sample, statistic, results, estimate, tail) : ([tail, 1 - tail] as const);
  return { estimate, interval: [quantile(results, shares[0]), quantile(results, shares[1])], method, seed, resamples };
}

function correctedShares(
  sample: Float64Array,
  statistic: (sample: Float64Array) => number,
  sorted: Float64Array,
  estimate: number,
  tail: number,
): [number, number] {
  let below = 0;
  for (const result of sorted) below += result < estimate ? 1 : result === estimate ? 0.5 : 0;
  // A statistic that always or never exceeds its estimate has no finite bias correction: then the plain percentiles stand.
  if (below === 0 || below === sorted.length) return [tail, 1 - tail];
  const bias = normalQuantile(below / sorted.length);
  const acceleration = jackknifeAcceleration(sample, statistic);
  const share = (p: number): number => {
    const z = bias + normalQuantile(p);
    return normalCumulative(bias + z / (1 - acceleration * z));
  };
  return [share(tail), share(1 - tail)];
}

function jackknifeAcceleration(sample: Float64Array, statistic: (sample: Float64Array) => number): number {
  const n = sample.length;
  const left = new Float64Array(n - 1);
  const estimates = new Float64Array(n);
  for (let i = 0; i < n; i++) {
    left.set(sample.subarray(0, i), 0);
    left.set(sample.subarray(i + 1), i);
    estimates[i] = finite(statistic(left));
  }
  const mean = estimates.reduce((sum, value) => sum + value, 0) / n;
  let cubes = 0;
  let squares = 0;
  for (const value of estimates) {
    cubes += (mean - value) ** 3;
    squares += (mean - value) ** 2;
  }
  return squares > 0 ? cubes / (6 * squares ** 1.5) : 0;
}

function finite(value: number): number {
  if (!Number.isFinite(value)) {
    throw new NumericError('UNDEFINED', 'The statistic has no value on one of the resamples, so no interval can be drawn from them.');
  }
  return value;
}

import { NumericError } from '../rig/numeric-error';
import { requireSample } from './require-sample';

export interface IntraclassCorrelation {
  readonly BMS: number;
  readonly JMS: number;
  readonly EMS: number;
  readonly WMS: number;
  /** Each target rated by its own judges. */
  readonly icc11: number;
  /** Judges are a sample of all judges: absolute agreement of single ratings. */
  readonly icc21: number;
  /** These judges only: consistency of single ratings. */
  readonly icc31: number;
}

/**
 * Intraclass correlations of single ratings from the two-way table of targets and judges.
 *
 * Mean squares: BMS between targets, JMS between judges, EMS what is left, WMS within targets. Identical judges give 1.
 *
 * @param ratings one row a target, one column a judge, none missing
 * @throws NumericError TOO_SHORT below two targets or two judges, BAD_REQUEST for rows of different length,
 *   UNDEFINED when all ratings are equal
 * @source Shrout and Fleiss 1979
 * @example their six targets and four judges: .17, .29, .71
 */
export function intraclassCorrelation(ratings: readonly (readonly number[])[]): IntraclassCorrelation {
  const n = ratings.length;
  const k = ratings[0]?.length ?? 0;
  ratings.forEach((row, i) => {
    requireSample(row, 0, `ratings[${i}]`);
    if (row.length !== k) throw new NumericError('BAD_REQUEST', `ratings[${i}] holds ${row.length} ratings, the first row ${k}.`);
  });
  if (n < 2 || k < 2) throw new NumericError('TOO_SHORT', 'At least two targets rated by at least two judges are needed.');

  // About the first rating, so that a large common offset does not eat the digits of the spread.
  const origin = ratings[0]?.[0] as number;
  const targetMeans = ratings.map((row) => row.reduce((sum, value) => sum + (value - origin), 0) / k);
  const judgeMeans = Array.from({ length: k }, (_, j) => ratings.reduce((sum, row) => sum + ((row[j] as number) - origin), 0) / n);
  const grand = targetMeans.reduce((sum, mean) => sum + mean, 0) / n;
  let within = 0;
  let residual = 0;
  let largest = 0;
  ratings.forEach((row, i) => {
    row.forEach((value, j) => {
      const target = targetMeans[i] as number;
      within += (value - origin - target) ** 2;
      residual += (value - origin - target - (judgeMeans[j] as number) + grand) ** 2;
      largest = Math.max(largest, Math.abs(value));
    });
  });
  const between = k * targetMeans.reduce((sum, mean) => sum + (mean - grand) ** 2, 0);
  const judges = n * judgeMeans.reduce((sum, mean) => sum + (mean - grand) ** 2, 0);
  if (between + within <= n * k * (8 * Number.EPSILON * largest) ** 2) {
    throw new NumericError('UNDEFINED', 'All ratings are equal: without differences between targets there is no correlation.');
  }
  const BMS = between / (n - 1);
  const JMS = judges / (k - 1);
  const EMS = residual / ((n - 1) * (k - 1));
  const WMS = within / (n * (k - 1));
  return {
    BMS,
    JMS,
    EMS,
    WMS,
    icc11: ratio(BMS - WMS, BMS + (k - 1) * WMS),
    icc21: ratio(BMS - EMS, BMS + (k - 1) * EMS + (k * (JMS - EMS)) / n),
    icc31: ratio(BMS - EMS, BMS + (k - 1) * EMS),
  };
}

function ratio(over: number, under: number): number {
  const value = over / under;
  if (!Number.isFinite(value)) {
    throw new NumericError('UNDEFINED', 'Judges differ by a constant only and targets not at all: the correlation is 0 over 0.');
  }
  return value;
}

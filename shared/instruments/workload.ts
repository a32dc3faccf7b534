import { NumericError } from '../rig/numeric-error';

/** The six subscales, in the order in which their pairs are asked. */
export const WORKLOAD_SUBSCALES = ['mental', 'physical', 'temporal', 'performance', 'effort', 'frustration'] as const;
export type WorkloadSubscale = (typeof WORKLOAD_SUBSCALES)[number];

/** Ratings from 0 (very low; for performance: perfect) to 100 (very high; for performance: failure). */
export type WorkloadRatings = Readonly<Partial<Record<WorkloadSubscale, number | null>>>;
/** Two subscales and the one that mattered more. */
export type WorkloadPair = readonly [WorkloadSubscale, WorkloadSubscale, WorkloadSubscale];
export type WorkloadWeights = Readonly<Record<WorkloadSubscale, number>>;

export const WORKLOAD_PAIRS: readonly (readonly [WorkloadSubscale, WorkloadSubscale])[] = WORKLOAD_SUBSCALES.flatMap((first, i) =>
  WORKLOAD_SUBSCALES.slice(i + 1).map((second) => [first, second] as const),
);

/**
 * Raw workload: the plain mean of the six ratings.
 *
 * @returns 0 to 100
 * @throws NumericError UNDEFINED when a rating is missing (the instrument has no rule to fill one in), BAD_REQUEST for a
 *   rating outside 0 to 100
 * @source Hart and Staveland 1988 (subscales); raw variant Hart 2006
 */
export function rawWorkload(ratings: WorkloadRatings): number {
  const complete = requireRatings(ratings);
  return WORKLOAD_SUBSCALES.reduce((sum, subscale) => sum + complete[subscale], 0) / WORKLOAD_SUBSCALES.length;
}

/**
 * Weighted workload: each rating counts as often as its subscale was chosen in the fifteen pairs.
 *
 * @param weights times chosen, whole numbers 0 to 5, fifteen in all
 * @returns 0 to 100
 * @throws NumericError as `rawWorkload`, and BAD_REQUEST for weights that fifteen pairs cannot give
 * @source Hart and Staveland 1988
 */
export function weightedWorkload(ratings: WorkloadRatings, weights: WorkloadWeights): number {
  const complete = requireRatings(ratings);
  let total = 0;
  let sum = 0;
  for (const subscale of WORKLOAD_SUBSCALES) {
    const weight = weights[subscale];
    if (!Number.isInteger(weight) || weight < 0 || weight > 5) {
      throw new NumericError('BAD_REQUEST', `The weight of ${subscale} is a whole number from 0 to 5.`);
    }
    total += weight;
    sum += weight * complete[subscale];
  }
  if (total !== WORKLOAD_PAIRS.length) {
    throw new NumericError('BAD_REQUEST', `The weights add up to ${total}; fifteen pairs give fifteen choices.`);
  }
  return sum / total;
}

/**
 * Weights from the fifteen pairs.
 *
 * @throws NumericError UNDEFINED when a pair was not answered, BAD_REQUEST when one comes twice or its choice is neither of the two
 */
export function workloadWeights(pairs: readonly WorkloadPair[]): WorkloadWeights {
  const weights = Object.fromEntries(WORKLOAD_SUBSCALES.map((subscale) => [subscale, 0])) as Record<WorkloadSubscale, number>;
  const answered = new Set<string>();
  for (const [first, second, chosen] of pairs) {
    const key = [first, second].sort().join(' ');
    if (first === second || answered.has(key)) throw new NumericError('BAD_REQUEST', `The pair ${first}, ${second} is not one of the fifteen, or comes twice.`);
    if (chosen !== first && chosen !== second) throw new NumericError('BAD_REQUEST', `${chosen} was not up for choice between ${first} and ${second}.`);
    answered.add(key);
    weights[chosen] += 1;
  }
  if (answered.size < WORKLOAD_PAIRS.length) {
    throw new NumericError('UNDEFINED', `${answered.size} of fifteen pairs were answered; without all of them there are no weights.`);
  }
  return weights;
}

function requireRatings(ratings: WorkloadRatings): Record<WorkloadSubscale, number> {
  const missing = WORKLOAD_SUBSCALES.filter((subscale) => ratings[subscale] === undefined || ratings[subscale] === null);
  if (missing.length > 0) {
    throw new NumericError('UNDEFINED', `Not rated: ${missing.join(', ')}. The index needs all six; report the single ratings instead.`);
  }
  const complete = ratings as Record<WorkloadSubscale, number>;
  for (const subscale of WORKLOAD_SUBSCALES) {
    const rating = complete[subscale];
    if (!(rating >= 0 && rating <= 100)) throw new NumericError('BAD_REQUEST', `The rating of ${subscale} lies outside 0 to 100.`);
  }
  return complete;
}

import { NumericError } from '../rig/numeric-error';
import { normalQuantile } from './normal-distribution';

export type KappaWeights = 'none' | 'linear' | 'quadratic';

export interface Kappa {
  readonly n: number;
  /** Observed agreement; weighted when weights are asked for. */
  readonly po: number;
  /** Agreement expected by chance from the two raters' totals. */
  readonly pe: number;
  readonly kappa: number;
  readonly standardError: number;
  /** Large-sample interval at the confidence asked for, cut at -1 and 1. */
  readonly interval: [number, number];
}

/**
 * Cohen's kappa: agreement of two raters beyond chance; weighted, when categories are in order.
 *
 * Interval and standard error are for large samples; with few items or kappa near 1 they flatter. When both raters used one
 * and the same category only, chance agreement is complete and kappa does not exist.
 *
 * @param table counts, square: rows are the first rater's categories, columns the second's, in the same order
 * @param weights disagreement that grows with distance: not at all, linearly or with its square
 * @param confidence share, 0.95 by default
 * @throws NumericError BAD_REQUEST when the table is not square or a count is negative, TOO_SHORT when it is empty,
 *   UNDEFINED when chance agreement is complete
 * @source Cohen 1960, 1968; standard error Fleiss, Cohen and Everitt 1969
 * @example cohenKappa([[20, 5], [10, 15]]) // po 0.7, pe 0.5, kappa 0.4
 */
export function cohenKappa(
  table: readonly (readonly number[])[],
  weights: KappaWeights = 'none',
  confidence = 0.95,
): Kappa {
  const n = requireTable(table);
  const size = table.length;
  const rows = table.map((row) => row.reduce((sum, count) => sum + count, 0) / n);
  const columns = rows.map((_, j) => table.reduce((sum, row) => sum + (row[j] as number), 0) / n);
  const weight = agreementWeight(weights, size);
  let observed = 0;
  let expected = 0;
  const rowWeights = new Float64Array(size);
  const columnWeights = new Float64Array(size);
  for (let i = 0; i < size; i++) {
    for (let j = 0; j < size; j++) {
      const w = weight(i, j);
      observed += (w * (table[i]?.[j] as number)) / n;
      expected += w * (rows[i] as number) * (columns[j] as number);
      rowWeights[i] = (rowWeights[i] as number) + w * (columns[j] as number);
      columnWeights[j] = (columnWeights[j] as number) + w * (rows[i] as number);
    }
  }
  const room = 1 - expected;
  if (room <= 4 * Number.EPSILON * size) {
    throw new NumericError('UNDEFINED', 'Both raters used a single category, so agreement beyond chance does not exist.');
  }
  const kappa = (observed - expected) / room;
  let spread = 0;
  for (let i = 0; i < size; i++) {
    for (let j = 0; j < size; j++) {
      const share = (table[i]?.[j] as number) / n;
      const term = weight(i, j) - ((rowWeights[i] as number) + (columnWeights[j] as number)) * (1 - kappa);
      spread += share * term * term;
    }
  }
  const variance = (spread - (kappa - expected * (1 - kappa)) ** 2) / (n * room * room);
  const standardError = Math.sqrt(Math.max(0, variance));
  const reach = normalQuantile(1 - (1 - confidence) / 2) * standardError;
  return { n, po: observed, pe: expected, kappa, standardError, interval: [Math.max(-1, kappa - reach), Math.min(1, kappa + reach)] };
}

/**
 * Counts how often two raters gave which pair of categories: the table that `cohenKappa` reads.
 *
 * @param first, second categories of the same items in the same order
 * @param categories    every category in its order
 * @throws NumericError BAD_REQUEST for lists of different length or a category that is not listed
 */
export function agreementTable(first: readonly string[], second: readonly string[], categories: readonly string[]): number[][] {
  if (first.length !== second.length) throw new NumericError('BAD_REQUEST', 'Both raters must have judged the same items.');
  const table = categories.map(() => categories.map(() => 0));
  first.forEach((category, item) => {
    const row = table[categories.indexOf(category)];
    const column = categories.indexOf(second[item] as string);
    if (row === undefined || column < 0) throw new NumericError('BAD_REQUEST', `Item ${item} was given a category that is not listed.`);
    row[column] = (row[column] as number) + 1;
  });
  return table;
}

function requireTable(table: readonly (readonly number[])[]): number {
  let n = 0;
  for (const [i, row] of table.entries()) {
    if (row.length !== table.length) {
      throw new NumericError('BAD_REQUEST', `The table must be square; row ${i} has ${row.length} of ${table.length} columns.`);
    }
    for (const count of row) {
      if (!Number.isFinite(count) || count < 0) throw new NumericError('BAD_REQUEST', `Row ${i} holds ${count}, which is not a count.`);
      n += count;
    }
  }
  if (table.length === 1) throw new NumericError('UNDEFINED', 'One category alone leaves nothing to agree about.');
  if (n <= 0) throw new NumericError('TOO_SHORT', 'The table counts no items at all.');
  return n;
}

function agreementWeight(weights: KappaWeights, size: number): (i: number, j: number) => number {
  if (weights === 'none') return (i, j) => (i === j ? 1 : 0);
  if (weights === 'linear') return (i, j) => 1 - Math.abs(i - j) / (size - 1);
  return (i, j) => 1 - ((i - j) / (size - 1)) ** 2;
}

import { NumericError } from '../rig/numeric-error';
import { normalTwoSided } from './normal-distribution';
import { midranks } from './ranks';
import { requireSample } from './require-sample';

/** Pairs up to which the exact distribution is taken when no method is named. */
export const EXACT_UP_TO = 50;
const EXACT_LIMIT = 500;

export interface WilcoxonOptions {
  /** `exact` lists every assignment of signs; `normal` approximates. Without it: exact up to 50 pairs that are not zero. */
  readonly method?: 'exact' | 'normal' | undefined;
  /** Normal only: pull the statistic half a rank towards its mean. */
  readonly continuityCorrection?: boolean | undefined;
}

export interface WilcoxonSignedRank {
  readonly method: 'exact' | 'normal';
  /** The smaller of the two rank sums. */
  readonly W: number;
  readonly wPlus: number;
  /** Differences left after zeros were dropped. */
  readonly n: number;
  readonly zerosDropped: number;
  readonly ties: boolean;
  /** Two-sided. */
  readonly p: number;
  /** Normal only. */
  readonly z?: number;
  /** Share of rank sum for a positive difference less that for a negative one, -1 to 1. */
  readonly rankBiserial: number;
}

/**
 * Wilcoxon's signed-rank test of paired differences. Zeros are dropped; equal sizes share their midrank.
 *
 * The exact p counts all 2^n sign patterns of the ranks at hand, midranks included, by convolution; so it stays exact with
 * ties. The normal p corrects the variance for ties.
 *
 * @param d differences, one a pair
 * @throws NumericError TOO_SHORT for an empty list, UNDEFINED when every difference is zero,
 *   BAD_REQUEST for `exact` with more than 500 differences
 * @source Wilcoxon 1945; ties in the variance as in Lehmann 1975; rank-biserial correlation Kerby 2014
 * @example wilcoxonSignedRank([-0.127, 1.265, 1.292, 1.449, 1.231, 0.246]) // W 1, p 0.0625
 */
export function wilcoxonSignedRank(d: ArrayLike<number>, options: WilcoxonOptions = {}): WilcoxonSignedRank {
  requireSample(d, 1, 'd');
  const kept = Array.from(d).filter((difference) => difference !== 0);
  const n = kept.length;
  if (n === 0) throw new NumericError('UNDEFINED', 'Every difference is zero, so there are no signs to rank.');
  const { ranks, ties } = midranks(kept.map(Math.abs));
  let wPlus = 0;
  for (let i = 0; i < n; i++) if ((kept[i] as number) > 0) wPlus += ranks[i] as number;
  const total = (n * (n + 1)) / 2;
  const W = Math.min(wPlus, total - wPlus);
  const method = options.method ?? (n <= EXACT_UP_TO ? 'exact' : 'normal');
  const shared = { W, wPlus, n, zerosDropped: d.length - n, ties: ties.length > 0, rankBiserial: (2 * wPlus) / total - 1 };
  if (method === 'exact') {
    if (n > EXACT_LIMIT) {
      throw new NumericError('BAD_REQUEST', `The exact distribution is kept to ${EXACT_LIMIT} differences; ask for the normal one.`);
    }
    return { method, ...shared, p: exactTwoSided(ranks, W) };
  }
  const tieTerm = ties.reduce((sum, size) => sum + size ** 3 - size, 0);
  const variance = (n * (n + 1) * (2 * n + 1)) / 24 - tieTerm / 48;
  const away = W - total / 2;
  const corrected = options.continuityCorrection === true ? Math.min(0, away + 0.5) : away;
  const z = corrected / Math.sqrt(variance);
  return { method, ...shared, z, p: normalTwoSided(z) };
}

/** Twice the share of sign patterns whose rank sum is at most W; twice the ranks are whole numbers even with ties. */
function exactTwoSided(ranks: Float64Array, W: number): number {
  const bound = Math.round(2 * W);
  let shares = new Float64Array(bound + 1);
  shares[0] = 1;
  for (const rank of ranks) {
    const step = Math.round(2 * rank);
    const next = new Float64Array(bound + 1);
    for (let sum = 0; sum <= bound; sum++) {
      const without = shares[sum] as number;
      const withRank = sum >= step ? (shares[sum - step] as number) : 0;
      next[sum] = 0.5 * (without + withRank);
    }
    shares = next;
  }
  return Math.min(1, 2 * shares.reduce((sum, share) => sum + share, 0));
}

/** One value, no values, no spread: each says which, and nothing comes out as NaN. */
import { describe, expect, it } from 'vitest';
import {
  blandAltman,
  bootstrapInterval,
  cohenDav,
  cohenDz,
  cohenKappa,
  hedgesG,
  holm,
  intraclassCorrelation,
  linearTrend,
  meanAndDeviation,
  pairedTTest,
  quantile,
  wilcoxonSignedRank,
  williamsSquare,
} from '@shared/stats';

const mean = (values: Float64Array): number => values.reduce((sum, value) => sum + value, 0) / values.length;

function outcome(run: () => unknown): unknown {
  try {
    return run();
  } catch (error) {
    return (error as { code: unknown }).code;
  }
}

describe('a single value', () => {
  it.each<[string, () => unknown]>([
    ['a paired t test', () => pairedTTest([1], [2])],
    ['d_z', () => cohenDz([1], [2])],
    ['d_av', () => cohenDav([1], [2])],
    ["Hedges' g", () => hedgesG([1], [2, 3])],
    ['a bootstrap interval', () => bootstrapInterval([1], mean, { seed: 1 })],
    ['limits of agreement', () => blandAltman([1], [1])],
    ['a trend', () => linearTrend([1], [2])],
    ['an intraclass correlation', () => intraclassCorrelation([[1, 2]])],
  ])('is too short for %s', (_, run) => {
    expect(outcome(run)).toBe('TOO_SHORT');
  });

  it('has a mean without spread, a signed rank that proves nothing, a p that needs no correction', () => {
    expect(meanAndDeviation([7])).toEqual({ n: 1, mean: 7, sd: 0, constant: true });
    expect(wilcoxonSignedRank([3])).toMatchObject({ W: 0, n: 1, p: 1 });
    expect(holm([0.04])).toEqual([0.04]);
    expect(quantile([5], 0.95)).toBe(5);
  });
});

describe('no spread', () => {
  it.each<[string, () => unknown]>([
    ['a paired t test of equal differences', () => pairedTTest([1, 2, 3], [2, 3, 4])],
    ['d_z of equal differences', () => cohenDz([0.1, 0.2, 0.3], [0.2, 0.3, 0.4])],
    ["Hedges' g of two constants", () => hedgesG([1, 1], [2, 2])],
    ['a trend over one time', () => linearTrend([4, 4, 4], [1, 2, 3])],
    ['a trend of a constant', () => linearTrend([1, 2, 3], [5, 5, 5])],
    ['identical raters with one category', () => cohenKappa([[5, 0], [0, 0]])],
    ['identical ratings', () => intraclassCorrelation([[2, 2], [2, 2]])],
    ['judges a constant apart', () => intraclassCorrelation([[1, 2], [1, 2], [1, 2]])],
    ['signed ranks of no differences', () => wilcoxonSignedRank([0, 0])],
  ])('leaves %s undefined', (_, run) => {
    expect(outcome(run)).toBe('UNDEFINED');
  });

  it('is no obstacle where the answer exists all the same', () => {
    expect(linearTrend([1, 2, 3, 4], [2, 4, 6, 8])).toMatchObject({ slope: 2, slopeCi95: [2, 2], p: 0, r2: 1 });
    expect(blandAltman([3, 4, 5], [1, 2, 3])).toMatchObject({ bias: 2, sd: 0, lower: 2, upper: 2 });
    expect(bootstrapInterval([4, 4, 4], mean, { seed: 1 })).toMatchObject({ estimate: 4, interval: [4, 4] });
    expect(cohenKappa([[0, 5], [5, 0]])).toMatchObject({ kappa: -1 });
  });
});

describe('nothing, and what is no number', () => {
  it.each<[string, unknown, () => unknown]>([
    ['no pairs', 'TOO_SHORT', () => pairedTTest([], [])],
    ['no p values', 'TOO_SHORT', () => holm([])],
    ['no sample', 'TOO_SHORT', () => quantile([], 0.5)],
    ['all missing', 'BAD_REQUEST', () => wilcoxonSignedRank([Number.NaN, Number.NaN])],
    ['one missing', 'BAD_REQUEST', () => linearTrend([1, 2, 3], [1, Number.NaN, 3])],
    ['an infinite one', 'BAD_REQUEST', () => blandAltman([1, Infinity], [1, 2])],
    ['unequal lists', 'BAD_REQUEST', () => pairedTTest([1, 2], [1, 2, 3])],
    ['a statistic that fails', 'UNDEFINED', () => bootstrapInterval([1, 2], () => Number.NaN, { seed: 1 })],
    ['one condition', 'BAD_REQUEST', () => williamsSquare(1)],
  ])('%s: %s', (_, code, run) => {
    expect(outcome(run)).toBe(code);
  });
});

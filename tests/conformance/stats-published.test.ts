/** Statistics against published examples and independent programs; the origin of every number stands beside it. */
import { describe, expect, it } from 'vitest';
import { bootstrapInterval } from '@shared/stats/bootstrap-interval';
import { cohenDz } from '@shared/stats/cohen-dz';
import { cohenKappa } from '@shared/stats/cohen-kappa';
import { hedgesG } from '@shared/stats/hedges-g';
import { incompleteBeta } from '@shared/stats/incomplete-beta';
import { intraclassCorrelation } from '@shared/stats/intraclass-correlation';
import { linearTrend } from '@shared/stats/linear-trend';
import { logGamma } from '@shared/stats/log-gamma';
import { noncentralCumulative } from '@shared/stats/noncentral-t';
import { normalQuantile, normalTwoSided } from '@shared/stats/normal-distribution';
import { pairedTTest } from '@shared/stats/paired-t-test';
import { studentCritical, studentTwoSided } from '@shared/stats/student-t';
import { wilcoxonSignedRank } from '@shared/stats/wilcoxon-signed-rank';

const off = (value: number, wanted: number): number => Math.abs(value - wanted) / Math.abs(wanted);

/** R's `sleep` data (Cushny and Peebles 1905, as used by Student 1908): extra hours under two drugs. */
const firstDrug = [0.7, -1.6, -0.2, -1.2, -0.1, 3.4, 3.7, 0.8, 0.0, 2.0];
const secondDrug = [1.9, 0.8, 1.1, 0.1, -0.1, 4.4, 5.5, 1.6, 4.6, 3.4];

describe('published examples', () => {
  it('the sleep data give t -4.0621, 9 degrees of freedom, p 0.002833 and [-2.4599, -0.7001] (R 4 t.test)', () => {
    const result = pairedTTest(firstDrug, secondDrug);
    expect(result.t).toBeCloseTo(-4.0621, 4);
    expect(result.df).toBe(9);
    expect(result.p).toBeCloseTo(0.002833, 6);
    expect(result.meanDiff).toBeCloseTo(-1.58, 12);
    expect(result.ci95[0]).toBeCloseTo(-2.4598858, 6);
    expect(result.ci95[1]).toBeCloseTo(-0.7001142, 6);
  });

  it('the sleep data give V 0 and p 0.0039 exactly without the pair that is equal (2 / 2^9)', () => {
    expect(wilcoxonSignedRank(firstDrug.map((hours, i) => hours - (secondDrug[i] as number)))).toMatchObject({ W: 0, n: 9, p: 2 / 512 });
  });

  it("Cohen's 2 x 2 table gives kappa 0.4", () => {
    const result = cohenKappa([[20, 5], [10, 15]]);
    expect(result.kappa).toBeCloseTo(0.4, 12);
    // Fleiss, Cohen and Everitt 1969, written out once more in numpy: A 0.1097, B 0.1019, C 0.0100.
    expect(result.standardError).toBeCloseTo(0.126996063, 8);
  });

  it('Shrout and Fleiss 1979: six targets, four judges, .17, .29 and .71', () => {
    const ratings = [[9, 2, 5, 8], [6, 1, 3, 2], [8, 4, 6, 8], [7, 1, 2, 6], [10, 5, 6, 9], [6, 2, 4, 7]];
    const result = intraclassCorrelation(ratings);
    expect(result.icc11).toBeCloseTo(0.17, 2);
    expect(result.icc21).toBeCloseTo(0.29, 2);
    expect(result.icc31).toBeCloseTo(0.71, 2);
  });

  it("Anscombe's first set lies about y = 3 + 0.5 x with r2 0.667 (Anscombe 1973)", () => {
    const x = [10, 8, 13, 9, 11, 14, 6, 4, 12, 7, 5];
    const y = [8.04, 6.95, 7.58, 8.81, 8.33, 9.96, 7.24, 4.26, 10.84, 4.82, 5.68];
    const trend = linearTrend(x, y);
    expect(trend.slope).toBeCloseTo(0.5, 3);
    expect(trend.intercept).toBeCloseTo(3.0, 3);
    expect(trend.r2).toBeCloseTo(0.667, 3);
    // scipy 1.17.1 linregress
    expect(trend.p).toBeCloseTo(0.0021696288730787905, 12);
  });
});

describe('distributions, to 1e-11 of the value in the tails too (mpmath and scipy 1.17.1)', () => {
  it.each([
    [1.47, 4, 0.21550685771026512],
    [12, 30, 5.580185415199261e-13],
    [40, 10, 2.2808577430857535e-12],
    [8, 1000, 3.4266614823914978e-15],
    [60, 3, 1.0199593673319755e-5],
    [0.01, 5, 0.9924080180425856],
  ])('two-sided p of t %f with %f degrees of freedom', (t, degrees, wanted) => {
    expect(off(studentTwoSided(t, degrees), wanted)).toBeLessThan(1e-11);
  });

  it.each([
    [0.05, 1, 12.706204736174694],
    [0.05, 4, 2.7764451051977934],
    [0.05, 100, 1.9839715185235518],
    [0.0002, 12, 5.263273007826034],
  ])('critical t at %f with %f degrees of freedom', (level, degrees, wanted) => {
    expect(off(studentCritical(level, degrees), wanted)).toBeLessThan(1e-12);
  });

  it.each([[6, 2 * 9.865876450376946e-10], [10, 2 * 7.61985302416047e-24], [20, 2 * 2.7536241186061556e-89]])(
    'two-sided p of z %f',
    (z, wanted) => {
      expect(off(normalTwoSided(z), wanted)).toBeLessThan(1e-12);
    },
  );

  it('normal quantiles', () => {
    expect(off(normalQuantile(0.975), 1.959963984540054)).toBeLessThan(1e-14);
    expect(off(normalQuantile(1e-10), -6.361340902404056)).toBeLessThan(1e-13);
    expect(normalQuantile(0.5)).toBe(0);
  });

  it('closed forms: Gamma(1/2) is root pi, I_x(1, 1) is x, I_x(2, 1) is x squared', () => {
    expect(logGamma(0.5)).toBeCloseTo(0.5 * Math.log(Math.PI), 14);
    expect(incompleteBeta(1, 1, 0.3)).toBeCloseTo(0.3, 15);
    expect(incompleteBeta(2, 1, 0.3)).toBeCloseTo(0.09, 15);
    expect([incompleteBeta(2, 3, 0), incompleteBeta(2, 3, 1)]).toEqual([0, 1]);
  });

  it('non-central t, with no non-centrality the central one', () => {
    expect(noncentralCumulative(1.2, 7, 0)).toBeCloseTo(1 - studentTwoSided(1.2, 7) / 2, 12);
    // scipy 1.17.1 nct.cdf
    expect(noncentralCumulative(3, 5, 2)).toBeCloseTo(0.7311098435083787, 10);
  });
});

describe('intervals', () => {
  it('d_z of the sleep data, interval by the non-central t (scipy 1.17.1 nct, brentq)', () => {
    const { value, interval } = cohenDz(firstDrug, secondDrug);
    expect(value).toBeCloseTo(-1.284558, 6);
    expect(interval[0]).toBeCloseTo(-2.1180165140, 6);
    expect(interval[1]).toBeCloseTo(-0.4146277564, 6);
  });

  it("Hedges' g of unequal groups does not change when the unit or the origin does", () => {
    const a = [4.1, 5.2, 6.3, 5.5, 4.9];
    const b = [3.2, 4.4, 3.9];
    const plain = hedgesG(a, b);
    const moved = hedgesG(a.map((x) => 1000 * x - 7e5), b.map((x) => 1000 * x - 7e5));
    expect(moved.value).toBeCloseTo(plain.value, 8);
    expect(plain.interval[0]).toBeLessThan(plain.value);
    expect(plain.interval[1]).toBeGreaterThan(plain.value);
  });

  it('a bootstrap interval is the same for the same seed, and near the t interval for a mean of normal values', () => {
    const sample = firstDrug.map((hours, i) => hours - (secondDrug[i] as number));
    const mean = (values: Float64Array): number => values.reduce((sum, value) => sum + value, 0) / values.length;
    const one = bootstrapInterval(sample, mean, { seed: 1905 });
    const two = bootstrapInterval(sample, mean, { seed: 1905 });
    expect(two).toEqual(one);
    expect(bootstrapInterval(sample, mean, { seed: 1906 }).interval).not.toEqual(one.interval);
    // scipy 1.17.1 bootstrap, BCa, 20 000 resamples: -2.64, -1.05
    expect(Math.abs(one.interval[0] + 2.64)).toBeLessThan(0.06);
    expect(Math.abs(one.interval[1] + 1.05)).toBeLessThan(0.06);
  });
});

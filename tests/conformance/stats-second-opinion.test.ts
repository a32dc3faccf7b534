/**
 * Distributions against jstat 1.9.6, an independent program: equal to about 1e-7, which is as far as jstat itself goes.
 * Tests against simple-statistics 7.12, on well-placed data (its sums are raw), and against jstat's analysis of variance.
 */
import fc from 'fast-check';
import { createRequire } from 'node:module';
import { describe, expect, it } from 'vitest';
import * as simple from 'simple-statistics';
import { incompleteBeta } from '@shared/stats/incomplete-beta';
import { normalQuantile, normalTwoSided } from '@shared/stats/normal-distribution';
import { intraclassCorrelation, linearTrend, pairedTTest, quantile, seededRandom } from '@shared/stats';
import { studentCritical, studentTwoSided } from '@shared/stats/student-t';

interface Distributions {
  ibeta(x: number, a: number, b: number): number;
  normal: { cdf(x: number, mean: number, sd: number): number; inv(p: number, mean: number, sd: number): number };
  anovafscore(...groups: number[][]): number;
  quantiles(values: number[], shares: number[], alpha: number, beta: number): number[];
  studentt: { cdf(x: number, degrees: number): number; inv(p: number, degrees: number): number };
}
// The package has no types of its own.
const { jStat } = createRequire(import.meta.url)('jstat') as { jStat: Distributions };

const SEED = 20261;
const runs = { seed: SEED, numRuns: 300 };

describe('jstat agrees on', () => {
  it('the incomplete beta function', () => {
    const shape = fc.double({ min: 0.5, max: 200, noNaN: true });
    fc.assert(
      fc.property(shape, shape, fc.double({ min: 0, max: 1, noNaN: true }), (a, b, x) => {
        expect(Math.abs(incompleteBeta(a, b, x) - jStat.ibeta(x, a, b))).toBeLessThan(1e-6);
      }),
      runs,
    );
  });

  it("Student's t and its critical values", () => {
    fc.assert(
      fc.property(fc.double({ min: 0.01, max: 8, noNaN: true }), fc.integer({ min: 1, max: 300 }), (t, degrees) => {
        const p = studentTwoSided(t, degrees);
        expect(Math.abs(p - 2 * jStat.studentt.cdf(-t, degrees))).toBeLessThan(1e-6);
        if (p > 1e-12) expect(studentCritical(p, degrees)).toBeCloseTo(t, 8);
      }),
      runs,
    );
  });

  it('the normal distribution and its quantiles', () => {
    fc.assert(
      fc.property(fc.double({ min: -5, max: 5, noNaN: true }), (z) => {
        expect(Math.abs(normalTwoSided(z) - 2 * jStat.normal.cdf(-Math.abs(z), 0, 1))).toBeLessThan(1e-9);
        expect(normalQuantile(normalTwoSided(z) / 2)).toBeCloseTo(-Math.abs(z), 9);
      }),
      runs,
    );
  });
});

describe('on samples of three to forty values', () => {
  const random = seededRandom(SEED);
  const sample = (n: number): number[] => Array.from({ length: n }, () => random.normal());
  const samples = Array.from({ length: 60 }, (_, k) => ({ a: sample(3 + (k % 38)), b: sample(3 + (k % 38)) }));

  it('simple-statistics has the same t of paired values', () => {
    for (const { a, b } of samples) {
      const { t, p, df } = pairedTTest(a, b);
      // Its tTest divides by n where a sample's deviation divides by n - 1: its t is too large by the root of n / (n - 1).
      expect(t).toBeCloseTo(simple.tTest(a.map((value, i) => value - b[i]!), 0)! * Math.sqrt(df / a.length), 10);
      expect(p).toBeCloseTo(2 * jStat.studentt.cdf(-Math.abs(t), df), 6);
    }
  });

  it('simple-statistics has the same line and the same share explained', () => {
    for (const { a, b } of samples) {
      const points = a.map((value, i) => [value, b[i]!]);
      const line = simple.linearRegression(points);
      const trend = linearTrend(a, b);
      expect(trend.slope).toBeCloseTo(line.m, 9);
      expect(trend.intercept).toBeCloseTo(line.b, 9);
      expect(trend.r2).toBeCloseTo(simple.rSquared(points, simple.linearRegressionLine(line)), 9);
    }
  });

  it('jstat has the same quantiles', () => {
    for (const { a } of samples) {
      const sorted = [...a].sort((x, y) => x - y);
      // alpha and beta of 1 are definition 7 of Hyndman and Fan.
      const shares = [0.05, 0.5, 0.9, 0.95];
      jStat.quantiles(a, shares, 1, 1).forEach((theirs, k) => expect(quantile(sorted, shares[k]!)).toBeCloseTo(theirs, 12));
    }
  });

  it("jstat's F between targets is that of the intraclass correlation: BMS over WMS", () => {
    for (const { a, b } of samples) {
      const { BMS, WMS } = intraclassCorrelation(a.map((value, i) => [value, b[i]!]));
      expect(BMS / WMS).toBeCloseTo(jStat.anovafscore(...a.map((value, i) => [value, b[i]!])), 8);
    }
  });
});

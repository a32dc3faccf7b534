/** Distributions against jstat 1.9.6, an independent program: equal to about 1e-7, which is as far as jstat itself goes. */
import fc from 'fast-check';
import { createRequire } from 'node:module';
import { describe, expect, it } from 'vitest';
import { incompleteBeta } from '@shared/stats/incomplete-beta';
import { normalQuantile, normalTwoSided } from '@shared/stats/normal-distribution';
import { studentCritical, studentTwoSided } from '@shared/stats/student-t';

interface Distributions {
  ibeta(x: number, a: number, b: number): number;
  normal: { cdf(x: number, mean: number, sd: number): number; inv(p: number, mean: number, sd: number): number };
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

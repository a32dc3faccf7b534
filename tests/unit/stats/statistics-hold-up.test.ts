/** Statistics on pure noise, unequal groups, large offsets, rescaled units. Every seed is written down. */
import fc from 'fast-check';
import * as simple from 'simple-statistics';
import { describe, expect, it } from 'vitest';
import { blandAltman } from '@shared/stats/bland-altman';
import { bootstrapInterval } from '@shared/stats/bootstrap-interval';
import { agreementTable, cohenKappa } from '@shared/stats/cohen-kappa';
import { hedgesG } from '@shared/stats/hedges-g';
import { holm } from '@shared/stats/holm';
import { intraclassCorrelation } from '@shared/stats/intraclass-correlation';
import { linearTrend } from '@shared/stats/linear-trend';
import { meanAndDeviation } from '@shared/stats/mean-and-deviation';
import { pairedTTest } from '@shared/stats/paired-t-test';
import { seededRandom } from '@shared/stats/seeded-random';
import { wilcoxonSignedRank } from '@shared/stats/wilcoxon-signed-rank';
import { williamsSquare } from '@shared/stats/williams-square';

const SEED = 20261;

function noise(seed: number, n: number): number[] {
  const random = seededRandom(seed);
  return Array.from({ length: n }, () => random.normal());
}

/** Share of runs in which something happened, and whether it lies within four deviations of the share wanted. */
function share(runs: number, happened: (run: number) => boolean): number {
  let count = 0;
  for (let run = 0; run < runs; run++) count += happened(run) ? 1 : 0;
  return count / runs;
}
const fourDeviations = (wanted: number, runs: number): number => 4 * Math.sqrt((wanted * (1 - wanted)) / runs);

describe('on pure noise', () => {
  const runs = 2000;
  const pair = (run: number): [number[], number[]] => [noise(SEED + 2 * run, 12), noise(SEED + 2 * run + 1, 12)];

  it('the paired t test finds something in 5 % of runs', () => {
    const found = share(runs, (run) => pairedTTest(...pair(run)).p < 0.05);
    expect(Math.abs(found - 0.05)).toBeLessThan(fourDeviations(0.05, runs));
  });

  it('the 95 % interval of the mean difference holds the true one in 95 % of runs', () => {
    const held = share(runs, (run) => {
      const [low, high] = pairedTTest(...pair(run)).ci95;
      return low <= 0 && high >= 0;
    });
    expect(Math.abs(held - 0.95)).toBeLessThan(fourDeviations(0.95, runs));
  });

  it('the exact signed-rank test finds something in at most 5 % of runs', () => {
    const found = share(runs, (run) => {
      const [a, b] = pair(run);
      return wilcoxonSignedRank(a.map((value, i) => value - (b[i] as number))).p < 0.05;
    });
    expect(found).toBeLessThan(0.05 + fourDeviations(0.05, runs));
    expect(found).toBeGreaterThan(0.03);
  });

  it("the interval of Hedges' g for 4 against 20 values holds zero in 95 % of runs", () => {
    const fewer = 400;
    const held = share(fewer, (run) => {
      const [low, high] = hedgesG(noise(SEED + 2 * run, 4), noise(SEED + 2 * run + 1, 20)).interval;
      return low <= 0 && high >= 0;
    });
    expect(Math.abs(held - 0.95)).toBeLessThan(fourDeviations(0.95, fewer));
  });

  it('the interval of a trend holds no slope in 95 % of runs', () => {
    const x = Array.from({ length: 10 }, (_, i) => i);
    const held = share(runs, (run) => {
      const [low, high] = linearTrend(x, noise(SEED + run, 10)).slopeCi95;
      return low <= 0 && high >= 0;
    });
    expect(Math.abs(held - 0.95)).toBeLessThan(fourDeviations(0.95, runs));
  });

  it('kappa of two raters who guess is near 0, and its interval holds 0 in about 95 % of runs', () => {
    const categories = ['confirmed', 'dismissed', 'unsure'];
    const fewer = 500;
    const held = share(fewer, (run) => {
      const random = seededRandom(SEED + run);
      const guess = (): string[] => Array.from({ length: 200 }, () => categories[random.below(3)] as string);
      const [low, high] = cohenKappa(agreementTable(guess(), guess(), categories)).interval;
      return low <= 0 && high >= 0;
    });
    expect(Math.abs(held - 0.95)).toBeLessThan(0.04);
  });

  it('a bootstrap interval of the mean of 30 values holds the truth in 90 to 97 % of runs', () => {
    const mean = (values: Float64Array): number => values.reduce((sum, value) => sum + value, 0) / values.length;
    const held = share(300, (run) => {
      const [low, high] = bootstrapInterval(noise(SEED + run, 30), mean, { seed: run, resamples: 500 }).interval;
      return low <= 0 && high >= 0;
    });
    expect(held).toBeGreaterThan(0.9);
    expect(held).toBeLessThan(0.98);
  });

  it('the generator is uniform to its tenth: chi squared of 10 bins stays below the 0.1 % point, 27.9', () => {
    const random = seededRandom(SEED);
    const bins = new Array<number>(10).fill(0);
    for (let i = 0; i < 100_000; i++) {
      const bin = Math.floor(10 * random.next());
      bins[bin] = (bins[bin] as number) + 1;
    }
    expect(bins.reduce((sum, count) => sum + (count - 10_000) ** 2 / 10_000, 0)).toBeLessThan(27.9);
  });
});

describe('large offsets and other units', () => {
  const a = noise(7, 15);
  const b = noise(8, 15);

  it('a common offset of an epoch in milliseconds leaves the paired tests and limits as they were', () => {
    // 2^41, about the year 2039 in ms: sums of it and these values keep 11 bits below the point.
    const offset = 2 ** 41;
    const snapped = (values: number[]): number[] => values.map((value) => Math.round(value * 1024) / 1024);
    const far = (values: number[]): number[] => snapped(values).map((value) => value + offset);
    const near = pairedTTest(snapped(a), snapped(b));
    const moved = pairedTTest(far(a), far(b));
    expect(moved.t).toBeCloseTo(near.t, 12);
    expect(moved.p).toBeCloseTo(near.p, 12);
    expect(blandAltman(far(a), far(b)).sd).toBeCloseTo(blandAltman(snapped(a), snapped(b)).sd, 12);
  });

  it('a slope of 2 over epoch milliseconds stays 2', () => {
    const x = Array.from({ length: 20 }, (_, i) => 1_790_000_000_000 + i);
    const trend = linearTrend(x, x.map((value, i) => 2 * (value - 1_790_000_000_000) + 5 + (i % 2) * 1e-6));
    expect(trend.slope).toBeCloseTo(2, 6);
    expect(trend.at(1_790_000_000_010)).toBeCloseTo(25, 5);
  });

  it('a deviation of 1 on top of 1e9 stays 1', () => {
    expect(meanAndDeviation([1e9, 1e9 + 1, 1e9 + 2]).sd).toBe(1);
  });

  it('scaling the unit scales differences and leaves p, d_z, kappa and correlations alone', () => {
    fc.assert(
      fc.property(fc.double({ min: 1e-6, max: 1e6, noNaN: true }), (unit) => {
        const plain = pairedTTest(a, b);
        const scaled = pairedTTest(a.map((value) => unit * value), b.map((value) => unit * value));
        expect(scaled.p).toBeCloseTo(plain.p, 10);
        expect(scaled.cohenDz).toBeCloseTo(plain.cohenDz, 10);
        expect(scaled.meanDiff / unit).toBeCloseTo(plain.meanDiff, 10);
        const ratings = a.map((value, i) => [value, b[i] as number]);
        const icc = intraclassCorrelation(ratings.map((row) => row.map((value) => unit * value)));
        expect(icc.icc21).toBeCloseTo(intraclassCorrelation(ratings).icc21, 10);
      }),
      { seed: SEED, numRuns: 50 },
    );
  });

  it('swapping the two lists turns the sign of t and leaves p', () => {
    expect(pairedTTest(b, a).t).toBeCloseTo(-pairedTTest(a, b).t, 12);
    expect(pairedTTest(b, a).p).toBeCloseTo(pairedTTest(a, b).p, 14);
  });

  it('agrees with simple-statistics 7.12 on deviation and slope of well-placed data', () => {
    expect(meanAndDeviation(a).sd).toBeCloseTo(simple.sampleStandardDeviation(a), 12);
    const points = a.map((value, i) => [value, b[i] as number]);
    expect(linearTrend(a, b).slope).toBeCloseTo(simple.linearRegression(points).m, 12);
  });
});

describe('signed ranks', () => {
  /** All 2^n sign patterns, one by one: the slow truth. */
  function enumerated(d: number[]): number {
    const { W, n } = wilcoxonSignedRank(d, { method: 'exact' });
    const sizes = d.filter((value) => value !== 0).map(Math.abs);
    const ranks = sizes.map((size) => sizes.filter((other) => other < size).length + (sizes.filter((other) => other === size).length + 1) / 2);
    let extreme = 0;
    for (let pattern = 0; pattern < 2 ** n; pattern++) {
      const plus = ranks.reduce((sum, rank, i) => sum + ((pattern >> i) & 1 ? rank : 0), 0);
      if (Math.min(plus, (n * (n + 1)) / 2 - plus) <= W + 1e-9) extreme += 1;
    }
    return extreme / 2 ** n;
  }

  it('exact p equals the count over all sign patterns, with ties and zeros too', () => {
    fc.assert(
      fc.property(fc.array(fc.integer({ min: -4, max: 4 }), { minLength: 1, maxLength: 11 }), (d) => {
        fc.pre(d.some((value) => value !== 0));
        expect(wilcoxonSignedRank(d, { method: 'exact' }).p).toBeCloseTo(Math.min(1, enumerated(d)), 12);
      }),
      { seed: SEED, numRuns: 100 },
    );
  });

  it('exact and normal p come together as pairs grow', () => {
    const d = noise(99, 200).map((value) => value + 0.1);
    const exact = wilcoxonSignedRank(d, { method: 'exact' }).p;
    expect(Math.abs(wilcoxonSignedRank(d, { method: 'normal', continuityCorrection: true }).p - exact)).toBeLessThan(1e-3);
  });
});

describe('Williams squares', () => {
  it.each(Array.from({ length: 11 }, (_, i) => i + 2))('%i conditions: every place and every pair of neighbours equally often', (n) => {
    const square = williamsSquare(n);
    const times = square.length / n;
    expect(square.length).toBe(n % 2 === 0 ? n : 2 * n);
    for (let place = 0; place < n; place++) {
      for (let condition = 0; condition < n; condition++) {
        expect(square.filter((row) => row[place] === condition).length).toBe(times);
      }
    }
    const neighbours = new Map<string, number>();
    for (const row of square) {
      for (let i = 1; i < n; i++) neighbours.set(`${row[i - 1]} ${row[i]}`, (neighbours.get(`${row[i - 1]} ${row[i]}`) ?? 0) + 1);
    }
    expect(neighbours.size).toBe(n * (n - 1));
    expect([...neighbours.values()].every((count) => count === times)).toBe(true);
  });
});

describe('Holm', () => {
  it('never lowers a p, keeps their order and stops at 1', () => {
    fc.assert(
      fc.property(fc.array(fc.double({ min: 0, max: 1, noNaN: true }), { minLength: 1, maxLength: 20 }), (p) => {
        const adjusted = holm(p);
        p.forEach((value, i) => {
          expect(adjusted[i]).toBeGreaterThanOrEqual(value);
          expect(adjusted[i]).toBeLessThanOrEqual(1);
          p.forEach((other, j) => value < other && expect(adjusted[i]).toBeLessThanOrEqual(adjusted[j] as number));
        });
      }),
      { seed: SEED, numRuns: 200 },
    );
  });
});

describe('identical raters', () => {
  it('agree completely when there is something to agree about', () => {
    expect(cohenKappa([[12, 0], [0, 9]])).toMatchObject({ kappa: 1, interval: [1, 1] });
    expect(intraclassCorrelation([[1, 1], [2, 2], [5, 5]])).toMatchObject({ icc11: 1, icc21: 1, icc31: 1 });
  });
});

/** Instruments at their published corners, and what they say about missing answers. */
import { describe, expect, it } from 'vitest';
import { BODY_REGIONS, discomfort, discomfortChange } from '@shared/instruments/discomfort';
import { pointingThroughput, type PointingTrials } from '@shared/instruments/pointing-throughput';
import { usabilityScale } from '@shared/instruments/usability-scale';
import { rawWorkload, weightedWorkload, WORKLOAD_PAIRS, workloadWeights } from '@shared/instruments/workload';

const code = (run: () => unknown): unknown => {
  try {
    return run();
  } catch (error) {
    return (error as { code: unknown }).code;
  }
};

const ratings = { mental: 60, physical: 20, temporal: 50, performance: 30, effort: 70, frustration: 10 };

describe('workload (Hart and Staveland 1988; raw Hart 2006)', () => {
  it('asks fifteen pairs', () => {
    expect(WORKLOAD_PAIRS).toHaveLength(15);
    expect(new Set(WORKLOAD_PAIRS.map((pair) => [...pair].sort().join())).size).toBe(15);
  });

  it('raw is the mean; weighted by always choosing the first of a pair counts 5, 4, 3, 2, 1, 0', () => {
    const weights = workloadWeights(WORKLOAD_PAIRS.map(([first, second]) => [first, second, first]));
    expect(weights).toEqual({ mental: 5, physical: 4, temporal: 3, performance: 2, effort: 1, frustration: 0 });
    expect(rawWorkload(ratings)).toBe(40);
    // By hand: (300 + 80 + 150 + 60 + 70 + 0) / 15
    expect(weightedWorkload(ratings, weights)).toBe(44);
  });

  it('equal ratings give that rating, however they are weighted', () => {
    const equal = { mental: 35, physical: 35, temporal: 35, performance: 35, effort: 35, frustration: 35 };
    const weights = workloadWeights(WORKLOAD_PAIRS.map(([first, second]) => [first, second, second]));
    expect([rawWorkload(equal), weightedWorkload(equal, weights)]).toEqual([35, 35]);
  });

  it('does not fill in what is missing, and refuses what cannot be', () => {
    expect(code(() => rawWorkload({ ...ratings, effort: null }))).toBe('UNDEFINED');
    expect(code(() => rawWorkload({}))).toBe('UNDEFINED');
    expect(code(() => rawWorkload({ ...ratings, effort: 101 }))).toBe('BAD_REQUEST');
    expect(code(() => rawWorkload({ ...ratings, effort: Number.NaN }))).toBe('BAD_REQUEST');
    const choices = WORKLOAD_PAIRS.map(([first, second]) => [first, second, first] as const);
    expect(code(() => workloadWeights(choices.slice(1)))).toBe('UNDEFINED');
    expect(code(() => workloadWeights([...choices, ['physical', 'mental', 'mental']]))).toBe('BAD_REQUEST');
    expect(code(() => workloadWeights([['mental', 'physical', 'effort']]))).toBe('BAD_REQUEST');
    const weights = { mental: 5, physical: 4, temporal: 3, performance: 2, effort: 1, frustration: 1 };
    expect(code(() => weightedWorkload(ratings, weights))).toBe('BAD_REQUEST');
  });
});

describe('System Usability Scale (Brooke 1996)', () => {
  it('a missing answer counts as the centre and is named; none at all gives no score', () => {
    expect(usabilityScale([5, 1, null, 1, 5, 1, 5, 1, 5, 1])).toEqual({ score: 95, missing: [3] });
    expect(code(() => usabilityScale(new Array<null>(10).fill(null)))).toBe('UNDEFINED');
  });

  it.each([[[1, 2, 3]], [[0, 1, 1, 1, 1, 1, 1, 1, 1, 1]], [[6, 1, 1, 1, 1, 1, 1, 1, 1, 1]], [[2.5, 1, 1, 1, 1, 1, 1, 1, 1, 1]]])(
    'refuses %j',
    (answers) => {
      expect(code(() => usabilityScale(answers))).toBe('BAD_REQUEST');
    },
  );
});

describe('discomfort by region, 0 to 10', () => {
  it('names the worst regions and leaves out what was not rated', () => {
    const result = discomfort({ neck: 2, wristRight: 6, handRight: 6, legs: null });
    expect(result).toMatchObject({ highest: 6, highestAt: ['wristRight', 'handRight'], rated: 3 });
    expect(result.mean).toBeCloseTo(14 / 3, 12);
    expect(result.notRated).toHaveLength(BODY_REGIONS.length - 3);
  });

  it('compares regions rated both times', () => {
    expect(discomfortChange({ neck: 2, eyes: 1, legs: 4 }, { neck: 5, eyes: 0, head: 9 })).toEqual({
      byRegion: { neck: 3, eyes: -1 },
      largestRise: 3,
      largestRiseAt: ['neck'],
    });
  });

  it('nothing rated is not "no discomfort"', () => {
    expect(code(() => discomfort({}))).toBe('UNDEFINED');
    expect(code(() => discomfortChange({ neck: 1 }, { head: 1 }))).toBe('UNDEFINED');
    expect(code(() => discomfort({ neck: 11 }))).toBe('BAD_REQUEST');
    expect(code(() => discomfort({ neck: 2.5 }))).toBe('BAD_REQUEST');
  });
});

describe('throughput (ISO 9241-411, Soukoreff and MacKenzie 2004)', () => {
  const trials: PointingTrials = {
    D: 0.16,
    W: 0.02,
    from: [0, 0, 0],
    target: [0.16, 0, 0],
    starts: [[0, 0, 0], [0, 0, 0], [0, 0, 0]],
    selections: [[0.158, 0.003, 0], [0.16, -0.004, 0], [0.162, 0, 0.002]],
    movementTimes: [0.5, 1, 1.5],
  };

  it('a task of 8 widths is log2 9 bits; misses across the axis do not count', () => {
    const result = pointingThroughput(trials);
    expect(result.idNominal).toBeCloseTo(Math.log2(9), 12);
    expect(result.throughputNominal).toBeCloseTo(Math.log2(9), 12);
    expect(result.sdAlongAxis).toBeCloseTo(0.002, 12);
    expect(result.effectiveWidth).toBeCloseTo(0.008266, 12);
    expect(result.effectiveDistance).toBeCloseTo(0.16, 12);
    expect(result.idEffective).toBeCloseTo(Math.log2(0.16 / 0.008266 + 1), 10);
  });

  it('says so when it does not exist', () => {
    const once = { ...trials, starts: [[0, 0, 0]], selections: [[0.16, 0, 0]], movementTimes: [1] };
    expect(code(() => pointingThroughput(once))).toBe('TOO_SHORT');
    expect(code(() => pointingThroughput({ ...trials, selections: trials.selections.map(() => [0.16, 0, 0]) }))).toBe('UNDEFINED');
    expect(code(() => pointingThroughput({ ...trials, target: [0, 0, 0] }))).toBe('UNDEFINED');
    expect(code(() => pointingThroughput({ ...trials, selections: [[-0.1, 0, 0], [-0.2, 0, 0], [-0.3, 0, 0]] }))).toBe('UNDEFINED');
    expect(code(() => pointingThroughput({ ...trials, W: 0 }))).toBe('BAD_REQUEST');
    expect(code(() => pointingThroughput({ ...trials, movementTimes: [1, 1, 0] }))).toBe('BAD_REQUEST');
    expect(code(() => pointingThroughput({ ...trials, movementTimes: [1, 1] }))).toBe('BAD_REQUEST');
    expect(code(() => pointingThroughput({ ...trials, target: [0.16, 0] }))).toBe('BAD_REQUEST');
  });
});

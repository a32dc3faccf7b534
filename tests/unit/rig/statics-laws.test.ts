/** Laws of tensions: balance, limits, the interval along the null vector, what is missing when they are not enough. */
import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import {
  cableStretch,
  capacityMargin,
  distributeTensions,
  lengthRates,
  multiply,
  nullVector,
  parseRig,
  rigModel,
  rotate,
  structureMatrix,
  wrenchFromTensions,
  wrenchSize,
  type Pose,
  type RigModel,
} from '@shared/rig';
import { SAMPLE_RIGS, SEED, orientation, outcome, poseOf, rigFile, rigWithCables, sampleRig, structureTimes, turnedRig, wrenchOf } from './rig-builders';

const rigs: readonly (readonly [string, RigModel])[] = SAMPLE_RIGS.flatMap((code) =>
  [8, 9, 10, 12].map((count) => [`${code} with ${count} cables`, rigWithCables(code, count)] as const),
);

/** A pose and a wrench that may be too much for the limits or not. */
const loads = (rig: RigModel, force: number) => fc.tuple(poseOf(rig), wrenchOf(rig, force));
const nowhereAbove = (values: ArrayLike<number>, most: number): boolean => Array.from(values).every((value) => value <= most);
const plus = (a: ArrayLike<number>, factor: number, b: ArrayLike<number>): number[] => Array.from(a, (value, i) => value + factor * b[i]!);

describe.each(rigs)('%s', (_, rig) => {
  const n = rig.cableCount;
  const runs = { seed: SEED, numRuns: 150 };

  it('tensions balance the wrench within the limits, or say infeasible and by how much', () => {
    let [feasible, infeasible] = [0, 0];
    fc.assert(
      fc.property(loads(rig, 60), ([pose, wrench]) => {
        const found = distributeTensions(rig, pose, wrench);
        const A = structureMatrix(rig, pose, new Float64Array(7 * n));
        const error = plus(wrench, 1, structureTimes(A, n, found.tensions));
        expect(found.tensions.length).toBe(n);
        expect(nowhereAbove(found.tensions, rig.tensionMax) && nowhereAbove(found.tensions.map((t) => -t), -rig.tensionMin)).toBe(true);
        if (found.feasible) {
          feasible++;
          expect(wrenchSize(rig, error)).toBeLessThan(1e-8);
        } else {
          infeasible++;
          expect(found.shortBy).toBeGreaterThan(1e-9);
          expect(found.shortBy).toBeCloseTo(wrenchSize(rig, error), 9);
          expect(Array.from(found.wrenchError, (value, row) => value - error[row]!).every((value) => Math.abs(value) < 1e-9)).toBe(true);
        }
      }),
      runs,
    );
    // Both answers came up often, so neither half of the test is empty.
    expect(Math.min(feasible, infeasible)).toBeGreaterThan(10);
  });

  it('nothing in the limits comes nearer the middle: no feasible step along the null space shortens the distance', () => {
    fc.assert(
      fc.property(loads(rig, 20), fc.array(fc.double({ min: -1, max: 1, noNaN: true }), { minLength: n, maxLength: n }), ([pose, wrench], other) => {
        const found = distributeTensions(rig, pose, wrench);
        fc.pre(found.feasible);
        const middle = (rig.tensionMin + rig.tensionMax) / 2;
        // Another balanced set inside the limits: the best tensions for a middle that lies elsewhere, by the same balance.
        const A = structureMatrix(rig, pose, new Float64Array(7 * n));
        const elsewhere = distributeTensions(rig, pose, wrench, { tensionMin: rig.tensionMin + Math.abs(other[0]!), tensionMax: rig.tensionMax });
        fc.pre(elsewhere.feasible);
        const between = plus(found.tensions, 1e-3, plus(elsewhere.tensions, -1, found.tensions));
        expect(wrenchSize(rig, plus(wrench, 1, structureTimes(A, n, between)))).toBeLessThan(1e-8);
        const distance = (t: ArrayLike<number>) => Array.from(t).reduce((sum, value) => sum + (value - middle) ** 2, 0);
        expect(distance(found.tensions)).toBeLessThanOrEqual(distance(between) + 1e-9);
      }),
      runs,
    );
  });

  it('the interval along the null vector ends exactly where a cable meets a limit', () => {
    fc.assert(
      fc.property(loads(rig, 20), ([pose, wrench]) => {
        const found = distributeTensions(rig, pose, wrench);
        fc.pre(found.feasible);
        if (!found.feasible) return;
        const [first, last] = found.interval;
        expect(first).toBeLessThanOrEqual(0);
        expect(last).toBeGreaterThanOrEqual(0);
        expect(Math.hypot(...found.direction)).toBeCloseTo(1, 12);
        const A = structureMatrix(rig, pose, new Float64Array(7 * n));
        expect(Math.max(...structureTimes(A, n, found.direction).map(Math.abs))).toBeLessThan(1e-12);
        for (const [end, outwards] of [[first, -1], [last, 1]] as const) {
          const at = plus(found.tensions, end, found.direction);
          const beyond = plus(found.tensions, end + outwards * 1e-3, found.direction);
          const excess = (t: readonly number[]) => Math.max(...t.map((value) => Math.max(value - rig.tensionMax, rig.tensionMin - value)));
          expect(Math.abs(excess(at))).toBeLessThan(1e-8);
          expect(excess(beyond)).toBeGreaterThan(1e-8);
        }
      }),
      runs,
    );
  });

  it('the capacity margin is how far the wrench may grow: inside it all is feasible, past the weakest side nothing is', () => {
    fc.assert(
      fc.property(loads(rig, 15), wrenchOf(rig, 1), ([pose, wrench], way) => {
        const { margin, weakest } = capacityMargin(rig, pose, wrench);
        expect(distributeTensions(rig, pose, wrench).feasible).toBe(margin >= 0);
        fc.pre(margin > 0.01 && wrenchSize(rig, way) > 1e-3);
        const anyway = plus(wrench, (0.999 * margin) / wrenchSize(rig, way), way);
        expect(distributeTensions(rig, pose, anyway).feasible).toBe(true);
        expect(wrenchSize(rig, weakest!)).toBeCloseTo(1, 9);
        expect(distributeTensions(rig, pose, plus(wrench, 0.999 * margin, weakest!)).feasible).toBe(true);
        const past = distributeTensions(rig, pose, plus(wrench, margin + 0.5, weakest!));
        expect(past.feasible).toBe(false);
        // Straight out of a facet: what is missing is how far the wrench went.
        if (!past.feasible) expect(past.shortBy).toBeCloseTo(0.5, 6);
      }),
      { seed: SEED, numRuns: n > 10 ? 25 : 60 },
    );
  });
});

describe('one rig, seen from elsewhere', () => {
  it.each(SAMPLE_RIGS)('%s: a rotation of everything leaves tensions, margin and shortfall alone', (code) => {
    const rig = sampleRig(code);
    fc.assert(
      fc.property(loads(rig, 60), orientation(Math.PI), ([pose, wrench], turn) => {
        const turned = rigModel(turnedRig(rigFile(code), turn));
        const there: Pose = { p: rotate(turn, pose.p), q: multiply(turn, pose.q), grasp: pose.grasp };
        const w = [...rotate(turn, [wrench[0]!, wrench[1]!, wrench[2]!]), ...rotate(turn, [wrench[3]!, wrench[4]!, wrench[5]!]), wrench[6]!];
        const [here, away] = [distributeTensions(rig, pose, wrench), distributeTensions(turned, there, w)];
        expect(away.feasible).toBe(here.feasible);
        expect(Math.max(...plus(away.tensions, -1, here.tensions).map(Math.abs))).toBeLessThan(1e-6);
        if (!here.feasible && !away.feasible) expect(away.shortBy).toBeCloseTo(here.shortBy, 8);
        expect(capacityMargin(turned, there, w).margin).toBeCloseTo(capacityMargin(rig, pose, wrench).margin, 7);
      }),
      { seed: SEED, numRuns: 80 },
    );
  });

  it('tensions of the null vector pull on nothing and take no power, whatever the movement', () => {
    const rig = sampleRig('wren-8');
    fc.assert(
      fc.property(poseOf(rig), wrenchOf(rig, 1), (pose, twist) => {
        const n = nullVector(structureMatrix(rig, pose, new Float64Array(56)), 8)!;
        expect(Math.max(...wrenchFromTensions(rig, pose, n, new Float64Array(7)).map(Math.abs))).toBeLessThan(1e-13);
        const rates = lengthRates(rig, pose, twist, new Float64Array(8));
        expect(Math.abs(n.reduce((sum, value, i) => sum + value * rates[i]!, 0))).toBeLessThan(1e-12);
      }),
      { seed: SEED, numRuns: 100 },
    );
  });
});

describe('limits, singular poses and bad numbers', () => {
  const rig = sampleRig('heron-8');
  const at = rig.home;
  const still = [0, 0, 0, 0, 0, 0, 0];

  it('limits that leave one tension only are feasible for the wrench of that tension and short for others', () => {
    const level = new Float64Array(8).fill(5);
    const wrench = wrenchFromTensions(rig, { ...at, p: [0.02, 0.01, -0.03] }, level, new Float64Array(7));
    const there = { ...at, p: [0.02, 0.01, -0.03] as [number, number, number] };
    const found = distributeTensions(rig, there, wrench, { tensionMin: 5, tensionMax: 5 });
    expect(found).toMatchObject({ feasible: true, tensions: level });
    const short = distributeTensions(rig, there, plus(wrench, 1, [3, 0, 0, 0, 0, 0, 0]), { tensionMin: 5, tensionMax: 5 });
    expect(short).toMatchObject({ feasible: false });
    if (!short.feasible) expect(short.shortBy).toBeCloseTo(3, 9);
  });

  it('moments count over a tenth of a metre in what is missing', () => {
    const short = distributeTensions(rig, at, [0, 0, 0, 0, 0, 2, 0], { tensionMin: 5, tensionMax: 5 });
    const level = wrenchFromTensions(rig, at, new Float64Array(8).fill(5), new Float64Array(7));
    const missing = plus([0, 0, 0, 0, 0, 2, 0], -1, level);
    if (!short.feasible) expect(short.shortBy).toBeCloseTo(Math.hypot(...missing.map((value, row) => (row >= 3 && row < 6 ? value / 0.1 : value))), 9);
    expect(short.feasible).toBe(false);
  });

  it('a rig of rank six balances what it can reach and is short by what it cannot', () => {
    const file = rigFile('heron-8');
    for (const body of file.bodies) if (body.motion) body.motion.ratio = 0;
    const stiff = parseRig(file);
    expect(distributeTensions(stiff, stiff.home, still)).toMatchObject({ feasible: true, rank: 6 });
    const grasp = distributeTensions(stiff, stiff.home, [0, 0, 0, 0, 0, 0, 4]);
    expect(grasp).toMatchObject({ feasible: false, rank: 6 });
    if (!grasp.feasible) expect(grasp.shortBy).toBeCloseTo(4, 9);
    expect(capacityMargin(stiff, stiff.home, still)).toEqual({ margin: 0, weakest: null });
    expect(capacityMargin(stiff, stiff.home, [0, 0, 0, 0, 0, 0, 4]).margin).toBeCloseTo(-4, 9);
  });

  it('refuses what is no wrench, no limit and no tension', () => {
    expect(outcome(() => distributeTensions(rig, at, [1, 2, 3]))).toBe('BAD_REQUEST');
    expect(outcome(() => distributeTensions(rig, at, [Number.NaN, 0, 0, 0, 0, 0, 0]))).toBe('BAD_REQUEST');
    expect(outcome(() => distributeTensions(rig, at, still, { tensionMin: 9, tensionMax: 3 }))).toBe('BAD_REQUEST');
    expect(outcome(() => distributeTensions(rig, at, still, { tensionMax: Infinity }))).toBe('BAD_REQUEST');
    expect(outcome(() => capacityMargin(rig, at, []))).toBe('BAD_REQUEST');
    expect(outcome(() => cableStretch(rig, [-1, 1, 1, 1, 1, 1, 1, 1], new Float64Array(8).fill(0.5)))).toBe('BAD_REQUEST');
  });

  it('stretch follows Hooke: the unstretched length times 1 + tension over stiffness is the length', () => {
    const tensions = Float64Array.of(0, 1, 5, 10, 15, 20, 25, 12.5);
    const lengths = new Float64Array(8).map((_, i) => 0.4 + 0.03 * i);
    cableStretch(rig, tensions, lengths).forEach((stretch, i) => {
      const unstretched = lengths[i]! - stretch;
      expect(unstretched * (1 + tensions[i]! / rig.axialStiffness)).toBeCloseTo(lengths[i]!, 14);
    });
  });
});

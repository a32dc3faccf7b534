/** Forward kinematics where it is easy, far off, disturbed, or impossible. */
import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import {
  cableLengths,
  createForwardSolver,
  forwardKinematics,
  geodesicAngle,
  multiply,
  parseRig,
  poseFromArray,
  poseToArray,
  quatFromRotvec,
  structureMatrix,
  type Pose,
  type RigModel,
  type Vec3,
} from '@shared/rig';
import { addLengthCurvature } from '@shared/rig/forward/add-length-curvature';
import { createLengthEquations, lengthEquations } from '@shared/rig/forward/length-equations';
import { SAMPLE_RIGS, SEED, orientation, outcome, poseOf, rigFile, rigWithCables, sampleRig } from './rig-builders';

const lengthsAt = (rig: RigModel, pose: Pose): Float64Array => cableLengths(rig, pose, new Float64Array(rig.cableCount));
const near = (a: Pose, b: Pose): number => Math.max(...a.p.map((value, axis) => Math.abs(value - b.p[axis]!)), geodesicAngle(a.q, b.q), Math.abs(a.grasp - b.grasp));

/** Largest slope of half the sum of squared length errors: zero at a least-squares pose. */
function slope(rig: RigModel, pose: Pose, lengths: ArrayLike<number>): number {
  const n = rig.cableCount;
  const A = structureMatrix(rig, pose, new Float64Array(7 * n));
  const e = lengthsAt(rig, pose).map((length, i) => length - lengths[i]!);
  return Math.max(...[0, 1, 2, 3, 4, 5, 6].map((row) => Math.abs(e.reduce((sum, value, i) => sum + A[row * n + i]! * value, 0))));
}

describe.each(SAMPLE_RIGS)('%s', (code) => {
  const rig = sampleRig(code);

  it('any lengths near a pose, noisy or with a slipped cable, end where the squared errors have no slope', () => {
    const error = fc.array(fc.double({ min: -0.002, max: 0.002, noNaN: true }), { minLength: 8, maxLength: 8 });
    fc.assert(
      fc.property(poseOf(rig), error, (pose, errors) => {
        const lengths = lengthsAt(rig, pose).map((length, i) => length + errors[i]!);
        const found = forwardKinematics(rig, lengths, pose);
        expect(found.converged).toBe(true);
        expect(slope(rig, found.pose, lengths)).toBeLessThan(1e-13);
        // The least there is cannot exceed what the true pose leaves.
        expect(found.residualRms).toBeLessThanOrEqual(Math.sqrt(errors.reduce((sum, value) => sum + value * value, 0) / 8) + 1e-12);
      }),
      { seed: SEED, numRuns: 300 },
    );
  });

  it('leads a start that is turned by up to half a turn back to the pose, for all but one start in forty', () => {
    let [starts, found] = [0, 0];
    fc.assert(
      fc.property(poseOf(rig), orientation(Math.PI), poseOf(rig), (pose, q, other) => {
        starts++;
        const answer = forwardKinematics(rig, lengthsAt(rig, pose), { ...other, q });
        expect(answer.converged).toBe(true);
        // Elsewhere the residual says so, or another pose has the same lengths and lies nearer to the start.
        if (near(answer.pose, pose) < 1e-9 || answer.residualRms < 1e-15) found++;
        else expect(answer.residualRms).toBeGreaterThan(1e-7);
      }),
      { seed: SEED, numRuns: 300 },
    );
    expect(found).toBeGreaterThanOrEqual((starts * 39) / 40);
  });

  it('goes on from a warm start in few steps', () => {
    const solver = createForwardSolver(rig);
    const pose = poseToArray(rig.home, new Float64Array(8));
    for (let i = 1; i <= 500; i++) {
      // 1 kHz, a hand at 0.3 m/s and 1 rad/s
      const s = i / 1000;
      const truth: Pose = { p: [0.06 * Math.sin(5 * s), 0.05 * Math.sin(6 * s), 0.03 * Math.sin(3 * s)], q: quatFromRotvec([0.2 * Math.sin(5 * s), 0, 0.15 * Math.sin(4 * s)]), grasp: rig.home.grasp };
      expect(solver.solve(lengthsAt(rig, truth), 0, pose)).toBe(true);
      expect(solver.iterations).toBeLessThanOrEqual(4);
      expect(near(poseFromArray(pose), { ...truth, p: [...truth.p] })).toBeLessThan(1e-10);
    }
  });
});

describe('failures', () => {
  const rig = sampleRig('heron-8');

  it('a missing length, an infinite one or a start that is none: status missing, the pose untouched', () => {
    const solver = createForwardSolver(rig);
    for (const wrong of [Number.NaN, Infinity]) {
      const lengths = lengthsAt(rig, rig.home);
      lengths[3] = wrong;
      const pose = poseToArray(rig.home, new Float64Array(8));
      expect(solver.solve(lengths, 0, pose)).toBe(false);
      expect(solver.status).toBe('missing');
      expect(solver.residualRms).toBeNaN();
      expect([...pose]).toEqual([...poseToArray(rig.home, new Float64Array(8))]);
    }
    expect(solver.solve(lengthsAt(rig, rig.home), 0, new Float64Array(8).fill(Number.NaN))).toBe(false);
    expect(solver.solve(lengthsAt(rig, rig.home), 0, poseToArray(rig.home, new Float64Array(8)))).toBe(true);
    expect(solver.status).toBe('solved');
  });

  it('lengths that no pose gives leave a residual that nobody takes for noise, or do not converge; never a pose without a word', () => {
    const lengthsThatCannotBe = [5, 0.001, 50].map((length) => new Float64Array(8).fill(length));
    const oneTwiceAsLong = lengthsAt(rig, rig.home).map((length, i) => (i === 2 ? 2 * length : length));
    for (const lengths of [...lengthsThatCannotBe, oneTwiceAsLong]) {
      const found = forwardKinematics(rig, lengths);
      expect(found.residualRms).toBeGreaterThan(0.02);
      expect([...found.pose.p, ...found.pose.q, found.pose.grasp].every(Number.isFinite)).toBe(true);
    }
  });

  it('the wrong number of lengths, or one of zero, is no request', () => {
    expect(outcome(() => forwardKinematics(rig, [0.5, 0.5]))).toBe('BAD_REQUEST');
    expect(outcome(() => forwardKinematics(rig, new Float64Array(8)))).toBe('BAD_REQUEST');
    expect(outcome(() => forwardKinematics(rig, lengthsAt(rig, rig.home), { p: [0, 0, 0], q: [0, 0, 0, 2], grasp: 0 }))).toBe('BAD_REQUEST');
  });

  it('a start on a cable exit has no direction to go, so home is the start', () => {
    const file = rigFile('heron-8');
    file.cables[0] = { exit: [0.25, 0.125, 0.25], attach: [0, 0, 0], body: 'palm' };
    const tied = parseRig(file);
    const start: Pose = { p: [0.25, 0.125, 0.25], q: [0, 0, 0, 1], grasp: 0.02 };
    const solver = createForwardSolver(tied);
    expect(solver.solve(lengthsAt(tied, tied.home), 0, poseToArray(start, new Float64Array(8)))).toBe(false);
    expect(solver.status).toBe('missing');
    expect(near(forwardKinematics(tied, lengthsAt(tied, tied.home), start).pose, tied.home)).toBeLessThan(1e-12);
    expect(outcome(() => forwardKinematics(parseRig({ ...file, home: start }), lengthsAt(tied, tied.home), start))).toBe('UNDEFINED');
  });
});

describe('the slopes that the steps are made from', () => {
  it.each([['heron-8', 8], ['wren-8', 8], ['wren-8', 12]] as const)('%s, %i cables: first and second derivatives are those of the squared errors', (code, count) => {
    const rig = rigWithCables(code, count);
    const equations = createLengthEquations(count);
    fc.assert(
      fc.property(poseOf(rig), poseOf(rig), (pose, other) => {
        const lengths = lengthsAt(rig, other);
        /** Half the sum of squared errors after a step d: position, rotation vector, grasp. */
        const f = (d: readonly number[]): number => {
          const q = multiply(quatFromRotvec([d[3]!, d[4]!, d[5]!]), pose.q);
          const p: Vec3 = [pose.p[0] + d[0]!, pose.p[1] + d[1]!, pose.p[2] + d[2]!];
          lengthEquations(rig, poseToArray({ p, q, grasp: pose.grasp + d[6]! }, new Float64Array(8)), lengths, 0, equations);
          return equations.sum[0]! / 2;
        };
        const h = 1e-4;
        const unit = (k: number, size: number) => [0, 0, 0, 0, 0, 0, 0].map((_, j) => (j === k ? size : 0));
        const sum = (a: number[], b: number[]) => a.map((value, k) => value + b[k]!);
        const numeric: number[] = [];
        for (let j = 0; j < 7; j++) {
          for (let k = 0; k <= j; k++) {
            numeric.push((f(sum(unit(j, h), unit(k, h))) - f(sum(unit(j, h), unit(k, -h))) - f(sum(unit(j, -h), unit(k, h))) + f(sum(unit(j, -h), unit(k, -h)))) / (4 * h * h));
          }
        }
        const slopes = [0, 1, 2, 3, 4, 5, 6].map((k) => (f(unit(k, h)) - f(unit(k, -h))) / (2 * h));
        const at = poseToArray(pose, new Float64Array(8));
        lengthEquations(rig, at, lengths, 0, equations);
        // Lengths change by -A' d, so the slope is -A e.
        slopes.forEach((value, k) => expect(value).toBeCloseTo(-equations.h[k]!, 6));
        addLengthCurvature(rig, at, lengths, 0, equations.M);
        numeric.forEach((value, k) => expect(Math.abs(value - equations.M[k]!)).toBeLessThan(2e-6));
      }),
      { seed: SEED, numRuns: 60 },
    );
  });
});

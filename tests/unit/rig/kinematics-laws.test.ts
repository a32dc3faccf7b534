/** Laws of the rig's geometry, for any pose of both sample rigs and for rigs of up to twelve cables. */
import fc from 'fast-check';
import { Quaternion, Vector3 } from 'three';
import { describe, expect, it } from 'vitest';
import {
  attachmentPoints,
  cableLengths,
  closure,
  forwardKinematics,
  geodesicAngle,
  lengthRates,
  multiply,
  parseRig,
  quatFromRotvec,
  rigModel,
  rotate,
  structureMatrix,
  structureMatrixGraspDerivative,
  twistFromLengthRates,
  wrenchFromTensions,
  type Pose,
  type RigModel,
} from '@shared/rig';
import { SAMPLE_RIGS, SEED, orientation, outcome, poseOf, rigFile, rigWithCables, sampleRig, scaledRig, turnedRig } from './rig-builders';

const runs = { seed: SEED, numRuns: 200 };
const speeds = fc.array(fc.double({ min: -1, max: 1, noNaN: true }), { minLength: 7, maxLength: 7 });
const largest = (a: ArrayLike<number>, b: ArrayLike<number>): number => Math.max(...Array.from(a, (value, i) => Math.abs(value - b[i]!)));

/** The pose after a small step along a twist: position, rotation vector in base axes, grasp. */
function stepped(pose: Pose, twist: readonly number[], dt: number): Pose {
  const turn = quatFromRotvec([dt * twist[3]!, dt * twist[4]!, dt * twist[5]!]);
  return {
    p: [pose.p[0] + dt * twist[0]!, pose.p[1] + dt * twist[1]!, pose.p[2] + dt * twist[2]!],
    q: multiply(turn, pose.q),
    grasp: pose.grasp + dt * twist[6]!,
  };
}

describe.each(SAMPLE_RIGS)('%s', (code) => {
  const rig = sampleRig(code);
  const n = rig.cableCount;

  it('power in is power out: what the hand puts in, the cables take', () => {
    const tensions = fc.array(fc.double({ min: 0, max: 25, noNaN: true }), { minLength: n, maxLength: n });
    fc.assert(
      fc.property(poseOf(rig), speeds, tensions, (pose, twist, t) => {
        const wrench = wrenchFromTensions(rig, pose, t, new Float64Array(7));
        const rates = lengthRates(rig, pose, twist, new Float64Array(n));
        const hand = twist.reduce((sum, speed, row) => sum + speed * wrench[row]!, 0);
        const cables = t.reduce((sum, tension, i) => sum + tension * rates[i]!, 0);
        expect(Math.abs(hand - cables)).toBeLessThan(1e-11);
      }),
      runs,
    );
  });

  it('forward(inverse(pose)) = pose, from home', () => {
    fc.assert(
      fc.property(poseOf(rig), (pose) => {
        const found = forwardKinematics(rig, cableLengths(rig, pose, new Float64Array(n)));
        expect(found.converged).toBe(true);
        expect(largest(found.pose.p, pose.p)).toBeLessThan(1e-11);
        expect(geodesicAngle(found.pose.q, pose.q)).toBeLessThan(1e-10);
        expect(Math.abs(found.pose.grasp - pose.grasp)).toBeLessThan(1e-10);
        expect(found.residualRms).toBeLessThan(1e-12);
      }),
      runs,
    );
  });

  it('cable speeds are the rates at which lengths change, and give the twist back', () => {
    fc.assert(
      fc.property(poseOf(rig), speeds, (pose, twist) => {
        const rates = lengthRates(rig, pose, twist, new Float64Array(n));
        const dt = 1e-5;
        const after = cableLengths(rig, stepped(pose, twist, dt), new Float64Array(n));
        const before = cableLengths(rig, stepped(pose, twist, -dt), new Float64Array(n));
        expect(largest(rates, after.map((length, i) => (length - before[i]!) / (2 * dt)))).toBeLessThan(1e-8);
        expect(largest(twistFromLengthRates(rig, pose, rates), twist)).toBeLessThan(1e-10);
      }),
      runs,
    );
  });

  it('the derivative by grasp is that of the structure matrix (central differences)', () => {
    const h = 1e-6;
    fc.assert(
      fc.property(poseOf(rig), (pose) => {
        const at = (grasp: number) => structureMatrix(rig, { ...pose, grasp }, new Float64Array(7 * n));
        const [after, before] = [at(pose.grasp + h), at(pose.grasp - h)];
        const exact = structureMatrixGraspDerivative(rig, pose, new Float64Array(7 * n));
        expect(largest(exact, after.map((value, i) => (value - before[i]!) / (2 * h)))).toBeLessThan(1e-7);
      }),
      runs,
    );
  });

  it('closure and null vector are unchanged when the rig is built larger or smaller', () => {
    fc.assert(
      fc.property(poseOf(rig), fc.double({ min: 0.01, max: 100, noNaN: true }), (pose, factor) => {
        const larger = parseRig(scaledRig(rigFile(code), factor));
        const grasp = rig.graspKind === 'slide' ? factor * pose.grasp : pose.grasp;
        const there = closure(larger, { ...pose, p: [factor * pose.p[0], factor * pose.p[1], factor * pose.p[2]], grasp });
        const here = closure(rig, pose);
        expect(there.closure).toBe(here.closure);
        expect(there.closureIndex).toBeCloseTo(here.closureIndex!, 8);
        expect(largest(there.n!, here.n!)).toBeLessThan(1e-9);
      }),
      runs,
    );
  });

  it('a rotation of everything rotates the answer and leaves lengths, closure and tensions alone', () => {
    fc.assert(
      fc.property(poseOf(rig), orientation(Math.PI), (pose, turn) => {
        const turned = rigModel(turnedRig(rigFile(code), turn));
        const there: Pose = { p: rotate(turn, pose.p), q: multiply(turn, pose.q), grasp: pose.grasp };
        const lengths = cableLengths(rig, pose, new Float64Array(n));
        expect(largest(cableLengths(turned, there, new Float64Array(n)), lengths)).toBeLessThan(1e-14);
        const [A, B] = [structureMatrix(rig, pose, new Float64Array(7 * n)), structureMatrix(turned, there, new Float64Array(7 * n))];
        for (let i = 0; i < n; i++) {
          const column = (M: Float64Array, row: number) => M[row * n + i]!;
          expect(largest(rotate(turn, [column(A, 0), column(A, 1), column(A, 2)]), [column(B, 0), column(B, 1), column(B, 2)])).toBeLessThan(1e-13);
          expect(largest(rotate(turn, [column(A, 3), column(A, 4), column(A, 5)]), [column(B, 3), column(B, 4), column(B, 5)])).toBeLessThan(1e-13);
          expect(column(B, 6)).toBeCloseTo(column(A, 6), 13);
        }
        expect(closure(turned, there).closureIndex).toBeCloseTo(closure(rig, pose).closureIndex!, 9);
        const found = forwardKinematics(turned, lengths, { ...rig.home, q: multiply(turn, rig.home.q), p: rotate(turn, rig.home.p) });
        expect(largest(found.pose.p, there.p)).toBeLessThan(1e-11);
        expect(geodesicAngle(found.pose.q, there.q)).toBeLessThan(1e-10);
      }),
      runs,
    );
  });

  it('attachments move with their bodies as three turns and shifts them', () => {
    fc.assert(
      fc.property(poseOf(rig), (pose) => {
        const points = attachmentPoints(rig, pose, new Float64Array(3 * n));
        rig.file.cables.forEach((cable, i) => {
          const motion = rig.file.bodies.find((body) => body.name === cable.body)?.motion;
          const point = new Vector3(...cable.attach);
          if (motion?.kind === 'slide') point.addScaledVector(new Vector3(...motion.axis), motion.ratio * pose.grasp);
          if (motion?.kind === 'hinge') {
            const origin = new Vector3(...motion.origin);
            point.sub(origin).applyAxisAngle(new Vector3(...motion.axis), motion.ratio * pose.grasp).add(origin);
          }
          point.applyQuaternion(new Quaternion(...pose.q)).add(new Vector3(...pose.p));
          expect(largest(points.subarray(3 * i, 3 * i + 3), point.toArray())).toBeLessThan(1e-14);
        });
      }),
      runs,
    );
  });
});

describe('rigs with nine, ten and twelve cables', () => {
  it.each([9, 10, 12])('%i cables: forward(inverse(pose)) = pose, and they close where the first eight do', (count) => {
    const rig = rigWithCables('heron-8', count);
    const eight = sampleRig('heron-8');
    fc.assert(
      fc.property(poseOf(rig), (pose) => {
        const found = forwardKinematics(rig, cableLengths(rig, pose, new Float64Array(count)));
        expect(largest(found.pose.p, pose.p)).toBeLessThan(1e-11);
        const { closure: closed, closureIndex, n } = closure(rig, pose);
        expect(closed).toBe(true);
        expect(closureIndex).toBeCloseTo(Math.min(...n!) / Math.max(...n!), 12);
        // The spare cables may pull on nothing much: what closed with eight stays closed.
        expect(closure(eight, pose).closure).toBe(true);
        const A = structureMatrix(rig, pose, new Float64Array(7 * count));
        for (let row = 0; row < 7; row++) {
          let sum = 0;
          for (let i = 0; i < count; i++) sum += A[row * count + i]! * n![i]!;
          expect(Math.abs(sum)).toBeLessThan(1e-9);
        }
      }),
      { seed: SEED, numRuns: 60 },
    );
  });
});

describe('poses and rigs without an answer', () => {
  const rig = sampleRig('heron-8');

  /** Jaws that do not move: nothing tells the grasp. */
  function stiffRig(): RigModel {
    const file = rigFile('heron-8');
    for (const body of file.bodies) if (body.motion) body.motion.ratio = 0;
    return parseRig(file);
  }

  it('a rig of rank six has no closure, no twist and no forward kinematics, and says which', () => {
    const stiff = stiffRig();
    expect(closure(stiff, stiff.home)).toEqual({ rank: 6, n: null, closure: false, closureIndex: null });
    expect(outcome(() => twistFromLengthRates(stiff, stiff.home, new Array<number>(8).fill(0)))).toBe('SINGULAR');
    const lengths = cableLengths(stiff, stiff.home, new Float64Array(8));
    expect(outcome(() => forwardKinematics(stiff, lengths))).toBe('SINGULAR');
    expect(outcome(() => forwardKinematics(stiff, lengths.map((length) => length + 0.001)))).toBe('SINGULAR');
  });

  it('a cable without length has no direction, but a length of zero', () => {
    const file = rigFile('heron-8');
    file.cables[0] = { exit: [0.03, 0.02, 0.05], attach: [0.03, 0.02, 0.05], body: 'palm' };
    file.home = { p: [0.05, 0, 0], q: [0, 0, 0, 1], grasp: 0.02 };
    const tied = parseRig(file);
    const at: Pose = { p: [0, 0, 0], q: [0, 0, 0, 1], grasp: 0.02 };
    expect(cableLengths(tied, at, new Float64Array(8))[0]).toBe(0);
    expect(outcome(() => structureMatrix(tied, at, new Float64Array(56)))).toBe('UNDEFINED');
    expect(outcome(() => structureMatrixGraspDerivative(tied, at, new Float64Array(56)))).toBe('UNDEFINED');
    expect(outcome(() => lengthRates(tied, at, [1, 0, 0, 0, 0, 0, 0], new Float64Array(8)))).toBe('UNDEFINED');
  });

  it('numbers that are none are refused, not carried on', () => {
    expect(outcome(() => structureMatrix(rig, { p: [Number.NaN, 0, 0], q: [0, 0, 0, 1], grasp: 0 }, new Float64Array(56)))).toBe('BAD_REQUEST');
    expect(outcome(() => cableLengths(rig, { p: [0, 0, 0], q: [0, 0, 0, 0], grasp: 0 }, new Float64Array(8)))).toBe('BAD_REQUEST');
    expect(outcome(() => lengthRates(rig, rig.home, [1, 2, 3], new Float64Array(8)))).toBe('BAD_REQUEST');
    expect(outcome(() => wrenchFromTensions(rig, rig.home, [1, 2, Infinity, 4, 5, 6, 7, 8], new Float64Array(7)))).toBe('BAD_REQUEST');
  });
});

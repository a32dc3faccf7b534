/**
 * The rig mathematics against general libraries that know nothing of rigs: three 0.187 for rotations, ml-matrix 6.15 for
 * decompositions, quadprog 1.6 (Goldfarb and Idnani, after Turlach's Fortran) for tension distribution, mathjs 14.9 for eigenvalues.
 */
import fc from 'fast-check';
import { eigs } from 'mathjs';
import { determinant, EigenvalueDecomposition, Matrix, SingularValueDecomposition, solve } from 'ml-matrix';
import { createRequire } from 'node:module';
import { Euler, Matrix4, Quaternion, Vector3 } from 'three';
import { describe, expect, it } from 'vitest';
import {
  canonical,
  closure,
  distributeTensions,
  eulerZyxFromQuat,
  geodesicAngle,
  matrixFromQuat,
  meanRotation,
  multiply,
  nullVector,
  quatFromEulerZyx,
  quatFromMatrix,
  quatFromRotvec,
  rankOf,
  registerPoints,
  rotate,
  rotvecFromQuat,
  slerp,
  structureMatrix,
  twistFromLengthRates,
  wrenchWeights,
  type Quat,
  type RigModel,
  type Vec3,
} from '@shared/rig';
import { symmetricEigen } from '@shared/rig/linear-algebra/symmetric-eigen';
import { singularValues } from '@shared/rig/linear-algebra/singular-values';
import { SAMPLE_RIGS, SEED, orientation, poseOf, rigWithCables, wrenchOf } from '../unit/rig/rig-builders';
import { largestDifference } from './rig-reference';

interface QuadraticProgram {
  /** Arrays count from 1. Smallest 1/2 x'Dx - d'x with A'x >= b, the first `equalities` columns as equalities. */
  solveQP(D: number[][], d: number[], A: number[][], b: number[], equalities: number): { solution: number[]; message: string };
}
// The package has no types of its own.
const quadprog = createRequire(import.meta.url)('quadprog') as QuadraticProgram;

const runs = { seed: SEED, numRuns: 200 };
const turn = orientation(Math.PI);
const point = fc.tuple(...[1, 2, 3].map(() => fc.double({ min: -2, max: 2, noNaN: true }))).map((v) => v as Vec3);
const three = (q: Quat): Quaternion => new Quaternion(...q);
/** Difference of two quaternions as rotations: their signs do not matter. */
const apart = (a: Readonly<Quat>, b: Readonly<Quat>): number => Math.min(largestDifference(a, b), largestDifference(a, b.map((value) => -value)));

describe('three agrees on', () => {
  it('products, turned vectors, matrices and back', () => {
    fc.assert(
      fc.property(turn, turn, point, (a, b, v) => {
        expect(largestDifference(multiply(a, b), three(a).multiply(three(b)).toArray())).toBeLessThan(1e-15);
        expect(largestDifference(rotate(a, v), new Vector3(...v).applyQuaternion(three(a)).toArray())).toBeLessThan(1e-14);
        const m = new Matrix4().makeRotationFromQuaternion(three(a)).elements;
        const rows = matrixFromQuat(a);
        expect(largestDifference(rows.flat(), [m[0], m[4], m[8], m[1], m[5], m[9], m[2], m[6], m[10]])).toBeLessThan(1e-14);
        const back = new Quaternion().setFromRotationMatrix(new Matrix4().makeRotationFromQuaternion(three(a)));
        expect(apart(quatFromMatrix(rows), back.toArray() as Quat)).toBeLessThan(1e-7);
        expect(apart(quatFromMatrix(rows), a)).toBeLessThan(1e-14);
      }),
      runs,
    );
  });

  it('yaw, pitch and roll: intrinsic z-y-x is its order ZYX', () => {
    fc.assert(
      fc.property(turn, (q) => {
        const euler = new Euler().setFromQuaternion(three(q), 'ZYX');
        const [yaw, pitch, roll] = eulerZyxFromQuat(q);
        fc.pre(Math.abs(Math.abs(pitch) - Math.PI / 2) > 1e-3);
        expect(Math.abs(Math.sin(yaw - euler.z))).toBeLessThan(1e-9);
        expect(Math.abs(pitch - euler.y)).toBeLessThan(1e-7);
        expect(Math.abs(Math.sin(roll - euler.x))).toBeLessThan(1e-9);
        const back = new Quaternion().setFromEuler(new Euler(roll, pitch, yaw, 'ZYX'));
        expect(apart(quatFromEulerZyx([yaw, pitch, roll]), back.toArray() as Quat)).toBeLessThan(1e-14);
        expect(apart(quatFromEulerZyx([yaw, pitch, roll]), q)).toBeLessThan(1e-13);
      }),
      runs,
    );
  });

  it('rotation vectors, angles and slerp', () => {
    fc.assert(
      fc.property(turn, turn, fc.double({ min: 0, max: 1, noNaN: true }), (a, b, s) => {
        const v = rotvecFromQuat(a);
        const angle = Math.hypot(...v);
        const axis = angle > 0 ? new Vector3(...v).divideScalar(angle) : new Vector3(1, 0, 0);
        expect(apart(new Quaternion().setFromAxisAngle(axis, angle).toArray() as Quat, a)).toBeLessThan(1e-14);
        expect(apart(quatFromRotvec(v), a)).toBeLessThan(1e-14);
        expect(geodesicAngle(a, b)).toBeCloseTo(three(a).angleTo(three(b)), 6);
        // Nearly opposite quaternions leave the way open; both programs then may take either.
        fc.pre(Math.abs(three(a).dot(three(b))) > 1e-3);
        expect(apart(slerp(a, b, s), three(a).slerp(three(b), s).toArray() as Quat)).toBeLessThan(1e-7);
      }),
      runs,
    );
  });

  it('slerp cuts the angle in proportion', () => {
    fc.assert(
      fc.property(turn, turn, fc.double({ min: 0, max: 1, noNaN: true }), (a, b, s) => {
        fc.pre(geodesicAngle(a, b) < Math.PI - 1e-3);
        expect(geodesicAngle(a, slerp(a, b, s))).toBeCloseTo(s * geodesicAngle(a, b), 12);
      }),
      runs,
    );
  });
});

const rigs: readonly (readonly [string, RigModel])[] = SAMPLE_RIGS.flatMap((code) =>
  [8, 9, 10, 12].map((count) => [`${code} with ${count} cables`, rigWithCables(code, count)] as const),
);
const rowsOf = (A: Float64Array, n: number): number[][] => Array.from({ length: 7 }, (_, row) => Array.from(A.subarray(row * n, (row + 1) * n)));

describe.each(rigs)('ml-matrix agrees for %s on', (_, rig) => {
  const n = rig.cableCount;

  it('singular values, rank, null vector and the least-squares twist', () => {
    fc.assert(
      fc.property(poseOf(rig), fc.array(fc.double({ min: -1, max: 1, noNaN: true }), { minLength: n, maxLength: n }), (pose, rates) => {
        const A = structureMatrix(rig, pose, new Float64Array(7 * n));
        const theirs = new SingularValueDecomposition(new Matrix(rowsOf(A, n)).transpose(), { autoTranspose: true });
        expect(largestDifference(singularValues(A, 7, n), theirs.diagonal)).toBeLessThan(1e-13);
        expect(rankOf(A, n)).toBe(theirs.diagonal.filter((value) => value > 1e-9 * theirs.diagonal[0]!).length);
        const least = solve(new Matrix(rowsOf(A, n)).transpose().mul(-1), Matrix.columnVector(rates), true).to1DArray();
        expect(largestDifference(twistFromLengthRates(rig, pose, rates), least)).toBeLessThan(1e-10);
        if (n > 8) return;
        // With one spare cable the null vector is what A's normal equations leave: eigenvector of A'A to its smallest value.
        const M = new Matrix(rowsOf(A, n));
        const eigen = new EigenvalueDecomposition(M.transpose().mmul(M), { assumeSymmetric: true });
        const smallest = eigen.realEigenvalues.indexOf(Math.min(...eigen.realEigenvalues));
        const vector = eigen.eigenvectorMatrix.getColumn(smallest);
        const sign = Math.sign(vector.reduce((sum, value) => sum + value, 0));
        expect(largestDifference(nullVector(A, n)!, vector.map((value) => sign * value))).toBeLessThan(1e-9);
      }),
      { seed: SEED, numRuns: 60 },
    );
  });
});

/** Lists and matrices as quadprog wants them: the first entry is never read. */
const counted = (values: readonly number[]): number[] => [0, ...values];
const countedRows = (rows: readonly (readonly number[])[]): number[][] => [[], ...rows.map(counted)];

describe.each(rigs)('quadprog agrees for %s on', (_, rig) => {
  const n = rig.cableCount;
  const identity = (scale: number): number[][] => Array.from({ length: n }, (_, i) => Array.from({ length: n }, (__, j) => (i === j ? scale : 0)));

  it('whether a wrench can be held, and with which tensions', () => {
    const [lowest, highest] = [rig.tensionMin, rig.tensionMax];
    let feasible = 0;
    fc.assert(
      fc.property(poseOf(rig), wrenchOf(rig, 40), (pose, wrench) => {
        const A = rowsOf(structureMatrix(rig, pose, new Float64Array(7 * n)), n);
        // Columns of constraints: seven balances, then a lower and an upper limit a cable.
        const columns = Array.from({ length: n }, (_, i) => [
          ...A.map((row) => row[i]!),
          ...identity(1)[i]!,
          ...identity(-1)[i]!,
        ]);
        const b = [...wrench.map((value) => -value), ...new Array<number>(n).fill(lowest), ...new Array<number>(n).fill(-highest)];
        const middle = new Array<number>(n).fill((lowest + highest) / 2);
        const theirs = quadprog.solveQP(countedRows(identity(1)), counted(middle), countedRows(columns), counted(b), 7);
        const ours = distributeTensions(rig, pose, wrench);
        // A hair's breadth inside or outside is rounding's to decide.
        fc.pre(ours.feasible || ours.shortBy > 1e-6);
        expect(theirs.message === '').toBe(ours.feasible);
        if (!ours.feasible) return;
        feasible++;
        expect(largestDifference(ours.tensions, theirs.solution.slice(1))).toBeLessThan(1e-7);
      }),
      { seed: SEED, numRuns: 120 },
    );
    expect(feasible).toBeGreaterThan(20);
  });

  it('how much is missing: bounded least squares with a slight pull to the middle, so that its Hessian is definite', () => {
    fc.assert(
      fc.property(poseOf(rig), wrenchOf(rig, 150), (pose, wrench) => {
        const ours = distributeTensions(rig, pose, wrench);
        fc.pre(!ours.feasible);
        if (ours.feasible) return;
        const W = wrenchWeights(rig);
        const B = rowsOf(structureMatrix(rig, pose, new Float64Array(7 * n)), n).map((row, r) => row.map((value) => W[r]! * value));
        const target = wrench.map((value, r) => -W[r]! * value);
        const slight = 1e-7;
        const D = Array.from({ length: n }, (_, i) => Array.from({ length: n }, (__, j) => B.reduce((sum, row) => sum + row[i]! * row[j]!, i === j ? slight : 0)));
        const d = Array.from({ length: n }, (_, i) => B.reduce((sum, row, r) => sum + row[i]! * target[r]!, 0));
        const columns = Array.from({ length: n }, (_, i) => [...identity(1)[i]!, ...identity(-1)[i]!]);
        const b = [...new Array<number>(n).fill(rig.tensionMin), ...new Array<number>(n).fill(-rig.tensionMax)];
        const t = quadprog.solveQP(countedRows(D), counted(d), countedRows(columns), counted(b), 0).solution.slice(1);
        const missing = Math.hypot(...B.map((row, r) => row.reduce((sum, value, i) => sum + value * t[i]!, -target[r]!)));
        // Theirs cannot be below ours, the least there is, and with so slight a pull it is hardly above.
        expect(missing).toBeGreaterThan(ours.shortBy - 1e-9);
        expect(missing - ours.shortBy).toBeLessThan(1e-4 * ours.shortBy + 1e-4);
      }),
      { seed: SEED, numRuns: 120 },
    );
  });

  it('closure: whether some all-positive tensions pull on nothing, as the nearest of them to 1', () => {
    fc.assert(
      fc.property(fc.tuple(...[1, 2, 3].map(() => fc.double({ min: -0.25, max: 0.25, noNaN: true }))), orientation(1.2), (p, q) => {
        const pose = { p: p as Vec3, q, grasp: rig.graspRange.max / 2 };
        const ours = closure(rig, pose);
        fc.pre(ours.rank === 7 && Math.abs(ours.closureIndex!) > 1e-4);
        const A = rowsOf(structureMatrix(rig, pose, new Float64Array(7 * n)), n);
        const columns = Array.from({ length: n }, (_, i) => [...A.map((row) => row[i]!), ...identity(1)[i]!]);
        const b = [...new Array<number>(7).fill(0), ...new Array<number>(n).fill(1)];
        const theirs = quadprog.solveQP(countedRows(identity(1)), counted(new Array<number>(n).fill(1)), countedRows(columns), counted(b), 7);
        expect(theirs.message === '').toBe(ours.closure);
      }),
      { seed: SEED, numRuns: 150 },
    );
  });
});

describe('registration', () => {
  const cloud = fc.array(point, { minLength: 4, maxLength: 12 });
  const length2 = (v: Readonly<Vec3>): number => v[0] ** 2 + v[1] ** 2 + v[2] ** 2;

  it('of points equals Kabsch by singular values (ml-matrix), mirrored sets too', () => {
    fc.assert(
      fc.property(cloud, cloud, fc.boolean(), (from, noise, mirrored) => {
        const to = from.map(([x, y, z], i) => [(mirrored ? -1 : 1) * y + 0.02 * (noise[i % noise.length]![0]), z + 1, x - 2] as Vec3);
        const mean = (points: readonly Vec3[]) => [0, 1, 2].map((axis) => points.reduce((sum, v) => sum + v[axis]!, 0) / points.length);
        const [a, b] = [mean(from), mean(to)];
        const centred = (points: readonly Vec3[], m: number[]) => new Matrix(points.map((v) => v.map((value, axis) => value - m[axis]!)));
        const covariance = centred(from, a).transpose().mmul(centred(to, b));
        const svd = new SingularValueDecomposition(covariance);
        const [s1, s2, s3] = svd.diagonal as [number, number, number];
        const U = svd.leftSingularVectors;
        const V = svd.rightSingularVectors;
        const sign = determinant(V.mmul(U.transpose())) < 0 ? -1 : 1;
        fc.pre(s2 + sign * s3 > 1e-3 * s1);
        const R = V.mmul(Matrix.diag([1, 1, sign])).mmul(U.transpose()).to2DArray();
        const ours = registerPoints(from, to);
        expect(largestDifference(ours.rotation.flat(), R.flat())).toBeLessThan(1e-10);
        // Umeyama 1991: trace(D S) over the spread of the first set.
        const scale = (s1 + s2 + sign * s3) / from.reduce((sum, v) => sum + length2([v[0] - a[0]!, v[1] - a[1]!, v[2] - a[2]!]), 0);
        expect(registerPoints(from, to, true).scale).toBeCloseTo(scale, 10);
      }),
      runs,
    );
  });

  it('a mean rotation is the largest eigenvector of the sum of q q^T (mathjs)', () => {
    fc.assert(
      fc.property(fc.array(orientation(1), { minLength: 2, maxLength: 10 }), (quats) => {
        const sum = [0, 1, 2, 3].map((j) => [0, 1, 2, 3].map((k) => quats.reduce((total, q) => total + q[j]! * q[k]!, 0)));
        const { eigenvectors } = eigs(sum);
        const largest = eigenvectors.reduce((a, b) => (Number(b.value) > Number(a.value) ? b : a)).vector as number[];
        expect(apart(meanRotation(quats), canonical(largest as Quat))).toBeLessThan(1e-7);
        const ours = symmetricEigen(sum);
        const theirs = new EigenvalueDecomposition(new Matrix(sum), { assumeSymmetric: true }).realEigenvalues.sort((a, b) => b - a);
        expect(largestDifference(ours.values, theirs)).toBeLessThan(1e-12);
      }),
      runs,
    );
  });
});

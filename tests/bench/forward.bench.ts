/**
 * Forward kinematics, sample after sample, against the same method written with ml-matrix: same recording, same start
 * (the last sample's pose), same steps, same end (a step below 1e-12). Both poses are compared before anything counts.
 */
import { readFileSync } from 'node:fs';
import { PerformanceObserver } from 'node:perf_hooks';
import { CholeskyDecomposition, Matrix } from 'ml-matrix';
import { cableLengths, createForwardSolver, matrixFromQuat, multiply, normalised, parseRig, poseFromArray, poseToArray, quatFromRotvec, type Pose, type RigModel } from '@shared/rig';
import { seededRandom } from '@shared/stats/seeded-random';
import type { Row } from './row';

export const name = 'forward';

const SAMPLES = 2000;
const ROUNDS = 9;
const STEP_TOLERANCE = 1e-12;
const CALLS = 1_000_000;

/** Two seconds of a hand in the middle of the frame, 1 kHz, with 15 um of noise on the lengths. */
function lengthsOf(rig: RigModel): Float64Array {
  const random = seededRandom(20261);
  const out = new Float64Array(SAMPLES * rig.cableCount);
  const { min, max } = rig.graspRange;
  for (let i = 0; i < SAMPLES; i++) {
    const s = (2 * Math.PI * i) / SAMPLES;
    const pose: Pose = {
      p: [0.06 * Math.sin(s), 0.05 * Math.sin(2 * s), 0.04 * Math.cos(s)],
      q: quatFromRotvec([0.25 * Math.sin(s), 0.2 * Math.cos(s), 0.1 * Math.sin(3 * s)]),
      grasp: min + (max - min) * (0.5 + 0.4 * Math.sin(s)),
    };
    cableLengths(rig, pose, out.subarray(i * rig.cableCount, (i + 1) * rig.cableCount));
  }
  return out.map((length) => length + 15e-6 * random.normal());
}

/** The method as one writes it with matrices: A from R b and R db/dg, then (A A^T) d = A e by Cholesky. */
function solveWithMatrices(rig: RigModel, lengths: Float64Array, start: Pose): Pose {
  const n = rig.cableCount;
  let { p, q, grasp } = start;
  for (let step = 0; step < 50; step++) {
    const b = new Matrix(3, n);
    const rate = new Matrix(3, n);
    for (let i = 0; i < n; i++) {
      const ratio = rig.hingeRatio[i]!;
      const [cos, sin] = [Math.cos(ratio * grasp), Math.sin(ratio * grasp)];
      for (let axis = 0; axis < 3; axis++) {
        const k = 3 * i + axis;
        b.set(axis, i, rig.fixedPart[k]! + grasp * rig.slidePart[k]! + cos * rig.cosPart[k]! + sin * rig.sinPart[k]!);
        rate.set(axis, i, rig.slidePart[k]! + ratio * (cos * rig.sinPart[k]! - sin * rig.cosPart[k]!));
      }
    }
    const R = new Matrix(matrixFromQuat(q));
    const r = R.mmul(b);
    const v = R.mmul(rate);
    const A = new Matrix(7, n);
    const e = new Matrix(n, 1);
    for (let i = 0; i < n; i++) {
      const [rx, ry, rz] = [r.get(0, i), r.get(1, i), r.get(2, i)];
      const l = Matrix.columnVector([rig.exits[3 * i]! - p[0] - rx, rig.exits[3 * i + 1]! - p[1] - ry, rig.exits[3 * i + 2]! - p[2] - rz]);
      const length = l.norm();
      const u = l.div(length).to1DArray() as [number, number, number];
      A.setColumn(i, [...u, ry * u[2] - rz * u[1], rz * u[0] - rx * u[2], rx * u[1] - ry * u[0], v.get(0, i) * u[0] + v.get(1, i) * u[1] + v.get(2, i) * u[2]]);
      e.set(i, 0, length - lengths[i]!);
    }
    const d = new CholeskyDecomposition(A.mmul(A.transpose())).solve(A.mmul(e)).to1DArray();
    p = [p[0] + d[0]!, p[1] + d[1]!, p[2] + d[2]!];
    q = normalised(multiply(quatFromRotvec([d[3]!, d[4]!, d[5]!]), q));
    grasp += d[6]!;
    if (Math.max(...d.map(Math.abs)) <= STEP_TOLERANCE) break;
  }
  return { p, q, grasp };
}

/** us per sample of one pass by either way. */
function passes(rig: RigModel, lengths: Float64Array) {
  const n = rig.cableCount;
  const solver = createForwardSolver(rig);
  const ours = new Float64Array(8);
  let steps = 0;
  return {
    ours(): number {
      poseToArray(rig.home, ours);
      const begin = process.hrtime.bigint();
      for (let i = 0; i < SAMPLES; i++) {
        solver.solve(lengths, i * n, ours);
        steps += solver.iterations;
      }
      return Number(process.hrtime.bigint() - begin) / 1000 / SAMPLES;
    },
    matrices(): number {
      let pose = rig.home;
      const begin = process.hrtime.bigint();
      for (let i = 0; i < SAMPLES; i++) pose = solveWithMatrices(rig, lengths.subarray(i * n, (i + 1) * n), pose);
      return Number(process.hrtime.bigint() - begin) / 1000 / SAMPLES;
    },
    stepsPerSample: () => steps / SAMPLES / (ROUNDS + 1),
  };
}

/** Largest difference of the two poses over the recording; both start every sample from their own last one. */
function disagreement(rig: RigModel, lengths: Float64Array): number {
  const n = rig.cableCount;
  const solver = createForwardSolver(rig);
  const values = poseToArray(rig.home, new Float64Array(8));
  let theirs = rig.home;
  let worst = 0;
  for (let i = 0; i < SAMPLES; i++) {
    if (!solver.solve(lengths, i * n, values)) throw new Error(`Sample ${i} was not solved: ${solver.status}.`);
    theirs = solveWithMatrices(rig, lengths.subarray(i * n, (i + 1) * n), theirs);
    const ours = poseFromArray(values);
    const sign = Math.sign(ours.q[3] * theirs.q[3]);
    const apart = [...ours.p.map((value, k) => value - theirs.p[k]!), ...ours.q.map((value, k) => value - sign * theirs.q[k]!), ours.grasp - theirs.grasp];
    worst = Math.max(worst, ...apart.map(Math.abs));
  }
  return worst;
}

/** Bytes of heap per call and collections, over a million calls with the collector left to itself. */
async function allocation(rig: RigModel, lengths: Float64Array): Promise<{ bytes: number; collections: number }> {
  const n = rig.cableCount;
  const solver = createForwardSolver(rig);
  const pose = poseToArray(rig.home, new Float64Array(8));
  const run = (calls: number): void => {
    for (let i = 0; i < calls; i++) solver.solve(lengths, (i % SAMPLES) * n, pose);
  };
  run(100_000);
  let collections = 0;
  const observer = new PerformanceObserver((list) => { collections += list.getEntries().length; });
  observer.observe({ entryTypes: ['gc'] });
  globalThis.gc?.();
  await seen();
  collections = 0;
  const before = process.memoryUsage().heapUsed;
  run(CALLS);
  const after = process.memoryUsage().heapUsed;
  await seen();
  observer.disconnect();
  return { bytes: (after - before) / CALLS, collections };
}

/** Observers are told in a later turn of the event loop. */
const seen = (): Promise<void> => new Promise((resolve) => setTimeout(resolve, 20));
const middle = (values: readonly number[]): number => [...values].sort((a, b) => a - b)[values.length >> 1]!;

export async function run(): Promise<Row[]> {
  const rows: Row[] = [];
  for (const code of ['heron-8', 'wren-8']) {
    const rig = parseRig(JSON.parse(readFileSync(new URL(`../../samples/rigs/${code}.json`, import.meta.url), 'utf8')));
    const lengths = lengthsOf(rig);
    const apart = disagreement(rig, lengths);
    const pass = passes(rig, lengths);
    pass.ours();
    pass.matrices();
    // By turns, so that a busy machine slows both.
    const times = Array.from({ length: ROUNDS }, () => ({ ours: pass.ours(), matrices: pass.matrices() }));
    const [ours, matrices] = [middle(times.map((time) => time.ours)), middle(times.map((time) => time.matrices))];
    const ratio = middle(times.map((time) => time.matrices / time.ours));
    rows.push({ name: `${code}: a sample`, value: ours, unit: 'us', baseline: `ml-matrix ${matrices.toFixed(1)} us`, ratio, target: 'at least 20 times faster', met: ratio >= 20 });
    rows.push({ name: `${code}: steps a sample`, value: pass.stepsPerSample(), unit: 'steps', baseline: null, ratio: null, target: 'for information', met: null });
    rows.push({ name: `${code}: largest difference of the two poses`, value: apart, unit: 'm or rad', baseline: null, ratio: null, target: 'below 1e-9', met: apart < 1e-9 });
    const { bytes, collections } = await allocation(rig, lengths);
    rows.push({ name: `${code}: heap a call`, value: bytes, unit: 'byte', baseline: null, ratio: null, target: `below 1 over ${CALLS / 1e6} million calls (the smallest object has 16)`, met: bytes < 1 });
    rows.push({ name: `${code}: collections in a million calls`, value: collections, unit: '', baseline: null, ratio: null, target: 'none', met: collections === 0 });
  }
  return rows;
}

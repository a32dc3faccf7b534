/** Tension distribution for rigs of eight to twelve cables, against a general quadratic programme (quadprog) on the same loads. */
import { readFileSync } from 'node:fs';
import { createRequire } from 'node:module';
import { distributeTensions, parseRig, quatFromRotvec, rigFileSchema, structureMatrix, type Pose, type RigModel, type Vec3 } from '@shared/rig';
import { seededRandom } from '@shared/stats/seeded-random';
import type { Row } from './row';

export const name = 'rig-tensions';

const LOADS = 400;
const ROUNDS = 7;
const MORE_CABLES: readonly (readonly [exit: Vec3, attach: Vec3])[] = [
  [[0.31, 0.02, 0.27], [0.03, 0.01, 0.05]],
  [[-0.3, -0.05, 0.26], [-0.028, 0.012, 0.047]],
  [[0.04, 0.29, -0.27], [0.01, 0.036, -0.044]],
  [[-0.06, -0.28, -0.25], [-0.016, -0.035, -0.05]],
];

interface QuadraticProgram {
  solveQP(D: number[][], d: number[], A: number[][], b: number[], equalities: number): { solution: number[]; message: string };
}
const quadprog = createRequire(import.meta.url)('quadprog') as QuadraticProgram;

interface Load {
  readonly pose: Pose;
  readonly wrench: number[];
}

function rigWith(count: number): RigModel {
  const file = rigFileSchema.parse(JSON.parse(readFileSync(new URL('../../samples/rigs/heron-8.json', import.meta.url), 'utf8')));
  for (const [exit, attach] of MORE_CABLES.slice(0, count - 8)) file.cables.push({ exit, attach, body: file.bodies[0]!.name });
  return parseRig(file);
}

/** Loads that the limits can hold, so that both programs go to the end. */
function loadsOf(rig: RigModel): Load[] {
  const random = seededRandom(20261);
  const within = (size: number) => size * (2 * random.next() - 1);
  const loads: Load[] = [];
  while (loads.length < LOADS) {
    const pose: Pose = { p: [within(0.07), within(0.07), within(0.07)], q: quatFromRotvec([within(0.25), within(0.25), within(0.25)]), grasp: 0.05 * random.next() };
    const wrench = [within(8), within(8), within(8), within(0.3), within(0.3), within(0.3), within(3)];
    if (distributeTensions(rig, pose, wrench).feasible) loads.push({ pose, wrench });
  }
  return loads;
}

/** The same as a quadratic programme; the arrays of the package count from 1. */
function byProgramme(rig: RigModel, { pose, wrench }: Load): number[] {
  const n = rig.cableCount;
  const A = structureMatrix(rig, pose, new Float64Array(7 * n));
  const unit = (i: number, j: number, size: number) => (i === j ? size : 0);
  const columns = Array.from({ length: n }, (_, i) => [
    0,
    ...Array.from({ length: 7 }, (__, row) => A[row * n + i]!),
    ...Array.from({ length: n }, (__, j) => unit(i, j, 1)),
    ...Array.from({ length: n }, (__, j) => unit(i, j, -1)),
  ]);
  const identity = Array.from({ length: n }, (_, i) => [0, ...Array.from({ length: n }, (__, j) => unit(i, j, 1))]);
  const middle = new Array<number>(n).fill((rig.tensionMin + rig.tensionMax) / 2);
  const bounds = [0, ...wrench.map((value) => -value), ...new Array<number>(n).fill(rig.tensionMin), ...new Array<number>(n).fill(-rig.tensionMax)];
  return quadprog.solveQP([[], ...identity], [0, ...middle], [[], ...columns], bounds, 7).solution.slice(1);
}

const middleOf = (values: readonly number[]): number => [...values].sort((a, b) => a - b)[values.length >> 1]!;

function timed(rig: RigModel, loads: readonly Load[], solve: (load: Load) => unknown): number {
  const begin = process.hrtime.bigint();
  for (const load of loads) solve(load);
  return Number(process.hrtime.bigint() - begin) / 1000 / loads.length;
}

export function run(): Promise<Row[]> {
  const rows = [8, 9, 10, 12].map((count): Row => {
    const rig = rigWith(count);
    const loads = loadsOf(rig);
    const ours = (load: Load) => distributeTensions(rig, load.pose, load.wrench);
    const theirs = (load: Load) => byProgramme(rig, load);
    const apart = Math.max(...loads.flatMap((load) => theirs(load).map((value, i) => Math.abs(value - ours(load).tensions[i]!))));
    if (!(apart < 1e-6)) throw new Error(`The two ways differ by ${apart} N.`);
    const times = Array.from({ length: ROUNDS }, () => [timed(rig, loads, ours), timed(rig, loads, theirs)] as const);
    const ratio = middleOf(times.map(([a, b]) => b / a));
    return {
      name: `${count} cables: one load, interval and active limits included`,
      value: middleOf(times.map(([a]) => a)),
      unit: 'us',
      baseline: `quadprog ${middleOf(times.map(([, b]) => b)).toFixed(1)} us`,
      ratio,
      target: 'for information',
      met: null,
    };
  });
  return Promise.resolve(rows);
}

import { structureMatrix } from '../kinematics/structure-matrix';
import { NumericError } from '../numeric-error';
import { poseFromArray, poseToArray, requirePose, type Pose } from '../pose';
import type { RigModel } from '../rig-model';
import { canonical } from '../rotation/canonical';
import { geodesicAngle } from '../rotation/geodesic-angle';
import { rankOf } from '../statics/rank-of';
import { requireNumbers } from '../statics/require-numbers';
import { createForwardSolver, type ForwardSolver, type ForwardStatus } from './create-forward-solver';

export type ForwardAnswer = {
  /** Pose whose cable lengths come nearest to the measured ones; q with w >= 0. */
  pose: Pose;
  /** m: root of the mean squared length residual. Large when no pose has these lengths. */
  residualRms: number;
  iterations: number;
  /** False when the steps did not become small: the pose is then the start, and must not be used. */
  converged: boolean;
};

/** m: a residual above this, a thousandth of a metre, means a wrong pose more often than a slipped cable. */
const DOUBTFUL_RESIDUAL = 1e-3;
/** m: below this the lengths fit as they only do at the pose they came from. */
const EXACT = 1e-6;
/** Share of the grasp's range by which an answer may leave it, because noise does so at the stops. No unit. */
const BEYOND_RANGE = 0.5;
/** rad: an answer turned further than this from its start was not led there by the start. */
const FAR_FROM_START = 0.5;

/**
 * Pose from cable lengths by least squares.
 *
 * From a start far off, the nearest minimum may be a pose that the rig cannot have (turned over, grasp far out of its
 * range). Such an answer is held against the one from home: the smaller residual wins, and between two that do not fit
 * exactly, the one that the rig can have.
 *
 * @param lengths n [m]
 * @param start   first guess; the rig's home when absent
 * @param solver  of the same rig, to save its memory in a loop
 * @throws NumericError BAD_REQUEST for wrong, non-positive or non-finite numbers; SINGULAR when the lengths do not tell
 *         the pose there (rank below 7); UNDEFINED when a cable has no length both at the start and at home
 * @source Gauss-Newton on cable lengths (e.g. Pott 2010); see `createForwardSolver`
 */
export function forwardKinematics(rig: RigModel, lengths: ArrayLike<number>, start: Pose = rig.home, solver: ForwardSolver = createForwardSolver(rig)): ForwardAnswer {
  requireNumbers(lengths, rig.cableCount, 'A set of lengths');
  if (Array.from(lengths).some((length) => length <= 0)) throw new NumericError('BAD_REQUEST', 'A cable length needs to be above zero.');
  const first = solveFrom(rig, lengths, requirePose(start), solver);
  const found = isPlausible(rig, start, first) ? first : better(rig, first, solveFrom(rig, lengths, rig.home, solver));
  if (found.status === 'missing') throw new NumericError('UNDEFINED', 'At the start and at home a cable has no length. Start from another pose.');
  const converged = found.status === 'solved';
  if (found.status === 'singular' || (converged && rankAt(rig, found.pose) < 7)) {
    throw new NumericError('SINGULAR', 'Some motion leaves all cable lengths unchanged here, so the lengths do not tell the pose.');
  }
  return { pose: found.pose, residualRms: found.residualRms, iterations: found.iterations, converged };
}

type Attempt = { status: ForwardStatus; pose: Pose; residualRms: number; iterations: number };

function solveFrom(rig: RigModel, lengths: ArrayLike<number>, start: Pose, solver: ForwardSolver): Attempt {
  const values = poseToArray(start, new Float64Array(8));
  solver.solve(lengths, 0, values);
  const pose = poseFromArray(values);
  pose.q = canonical(pose.q);
  return { status: solver.status, pose, residualRms: solver.residualRms, iterations: solver.iterations };
}

/** True when the rig can have this pose and the start led to it: palm in the frame, grasp about in range, lengths that fit, no tumbling. */
function isPlausible(rig: RigModel, start: Pose, { status, pose, residualRms }: Attempt): boolean {
  const { min, max } = rig.graspRange;
  const beyond = BEYOND_RANGE * (max - min);
  const inFrame = pose.p.every((value, axis) => value >= rig.frame.min[axis]! && value <= rig.frame.max[axis]!);
  const inRange = pose.grasp >= min - beyond && pose.grasp <= max + beyond;
  return status === 'solved' && residualRms <= DOUBTFUL_RESIDUAL && inFrame && inRange && geodesicAngle(start.q, pose.q) <= FAR_FROM_START;
}

/** The attempt from home when it is plausible and the first is no exact fit that it lacks; otherwise the one that fits better. */
function better(rig: RigModel, first: Attempt, second: Attempt): Attempt {
  const iterations = first.iterations + second.iterations;
  if (second.status !== 'solved') return { ...(first.status === 'missing' ? second : first), iterations };
  const fits = second.residualRms < first.residualRms || (isPlausible(rig, rig.home, second) && (first.residualRms > EXACT || second.residualRms <= EXACT));
  return { ...(first.status !== 'solved' || fits ? second : first), iterations };
}

function rankAt(rig: RigModel, pose: Pose): number {
  return rankOf(structureMatrix(rig, pose, new Float64Array(7 * rig.cableCount)), rig.cableCount);
}

import { structureMatrix } from '../kinematics/structure-matrix';
import { NumericError } from '../numeric-error';
import { poseFromArray, poseToArray, requirePose, type Pose } from '../pose';
import type { RigModel } from '../rig-model';
import { canonical } from '../rotation/canonical';
import { rankOf } from '../statics/rank-of';
import { requireNumbers } from '../statics/require-numbers';
import { createForwardSolver, type ForwardSolver } from './create-forward-solver';

export type ForwardAnswer = {
  /** Pose whose cable lengths come nearest to the measured ones; q with w >= 0. */
  pose: Pose;
  /** m: root of the mean squared length residual. Large when no pose has these lengths. */
  residualRms: number;
  iterations: number;
  /** False when the steps did not become small: the pose is then the start, and must not be used. */
  converged: boolean;
};

/**
 * Pose from cable lengths by least squares.
 *
 * @param lengths n [m]
 * @param start   first guess; the rig's home when absent
 * @param solver  of the same rig, to save its memory in a loop
 * @throws NumericError BAD_REQUEST for wrong, non-positive or non-finite numbers; SINGULAR when the lengths do not tell
 *         the pose there (rank below 7)
 * @source Gauss-Newton on cable lengths (e.g. Pott 2010); damping of Levenberg 1944 and Marquardt 1963
 */
export function forwardKinematics(rig: RigModel, lengths: ArrayLike<number>, start: Pose = rig.home, solver: ForwardSolver = createForwardSolver(rig)): ForwardAnswer {
  requireNumbers(lengths, rig.cableCount, 'A set of lengths');
  if (Array.from(lengths).some((length) => length <= 0)) throw new NumericError('BAD_REQUEST', 'A cable length needs to be above zero.');
  const values = poseToArray(requirePose(start), new Float64Array(8));
  const converged = solver.solve(lengths, 0, values);
  const pose = poseFromArray(values);
  pose.q = canonical(pose.q);
  if (solver.status === 'missing') throw new NumericError('UNDEFINED', 'At the start a cable has no length. Start from another pose.');
  if (solver.status === 'singular' || (converged && rankAt(rig, pose) < 7)) {
    throw new NumericError('SINGULAR', 'Some motion leaves all cable lengths unchanged here, so the lengths do not tell the pose.');
  }
  return { pose, residualRms: solver.residualRms, iterations: solver.iterations, converged };
}

function rankAt(rig: RigModel, pose: Pose): number {
  return rankOf(structureMatrix(rig, pose, new Float64Array(7 * rig.cableCount)), rig.cableCount);
}

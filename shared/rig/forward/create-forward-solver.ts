import type { RigModel } from '../rig-model';
import { addLengthCurvature } from './add-length-curvature';
import { lengthEquations } from './length-equations';
import { solveCholesky7 } from './solve-cholesky7';

/**
 * How a solution ended: `solved`; `singular`, when some motion leaves all lengths unchanged; `unsettled`, when the
 * steps did not become small; `missing`, when a length or the start is not a finite number.
 */
export type ForwardStatus = 'solved' | 'singular' | 'unsettled' | 'missing';

/** Forward kinematics for a stream of samples: its memory is made once, `solve` allocates nothing. */
export type ForwardSolver = {
  /**
   * @param lengths measured lengths [m], n numbers from `offset` on
   * @param pose    in: start, out: solution, as x y z qx qy qz qw grasp (m, unit quaternion, m or rad). Not changed
   *                unless the answer is `true`, so that the next sample starts from the last good pose.
   * @returns true when solved
   */
  solve(lengths: ArrayLike<number>, offset: number, pose: Float64Array): boolean;
  /** Of the last `solve`. residualRms [m] is NaN when `status` is `missing`. */
  readonly status: ForwardStatus;
  readonly residualRms: number;
  readonly iterations: number;
};

/** m and rad: a step below this ends the iteration. A small change of length does not: a pose can slide far on little. */
const STEP_TOLERANCE = 1e-12;
const ITERATIONS = 200;
/** Gauss-Newton has mostly ended by then; where it has not, its steps circle, and Newton's own steps follow. */
const GAUSS_NEWTON_STEPS = 8;
/** First damping after a step that made things worse, and the factors between tries. No unit. */
const FIRST_DAMPING = 1e-4;
const MORE_DAMPING = 10;
const LESS_DAMPING = 0.1;
const MOST_DAMPING = 1e8;
/** Share of a length that rounding may take from it: a double's last digits, after a few operations. No unit. */
const ROUNDING = 4e-16;

/**
 * Solver for one rig: least squares of the cable lengths by Gauss-Newton steps, damped only after a step that made the
 * residual worse, and by Newton steps when the first eight have not settled it.
 *
 * @source Gauss-Newton on cable lengths (e.g. Pott 2010); damping of Levenberg 1944 and Marquardt 1963; Newton's term
 *         in `addLengthCurvature`
 */
export function createForwardSolver(rig: RigModel): ForwardSolver {
  const equations = { M: new Float64Array(28), h: new Float64Array(7) };
  const { M, h: step } = equations;
  const here = new Float64Array(8);
  const before = new Float64Array(8);
  // m: what rounding makes of the root of the sum of squares; sums closer than that are equal.
  const noise = ROUNDING * Math.sqrt(rig.cableCount) * Math.max(...rig.exits.map(Math.abs));
  let status: ForwardStatus = 'missing';
  let residualRms = Number.NaN;
  let iterations = 0;

  function end(how: ForwardStatus, sum: number): boolean {
    status = how;
    residualRms = how === 'missing' ? Number.NaN : Math.sqrt(sum / rig.cableCount);
    return how === 'solved';
  }

  /** True when the lengths leave some motion from `here` free. */
  function isFlat(lengths: ArrayLike<number>, offset: number): boolean {
    lengthEquations(rig, here, lengths, offset, equations);
    return solveCholesky7(M, step, 0, 0) === 0;
  }

  return {
    get status() {
      return status;
    },
    get residualRms() {
      return residualRms;
    },
    get iterations() {
      return iterations;
    },
    solve(lengths, offset, pose) {
      copy(pose, here);
      normalise(here);
      iterations = 0;
      let damping = 0;
      let sum = lengthEquations(rig, here, lengths, offset, equations);
      if (!(sum < Infinity)) return end('missing', sum);
      for (;;) {
        let pivot = 0;
        if (iterations >= GAUSS_NEWTON_STEPS) {
          addLengthCurvature(rig, here, lengths, offset, M);
          pivot = solveCholesky7(M, step, 0, 0);
          // Not a valley here: the way down is Gauss-Newton's.
          if (pivot === 0) lengthEquations(rig, here, lengths, offset, equations);
        }
        while (pivot === 0) {
          pivot = solveCholesky7(M, step, damping, floorOf(M));
          if (pivot === 0) damping = Math.max(FIRST_DAMPING, damping * MORE_DAMPING);
          if (damping > MOST_DAMPING) return end('singular', sum);
        }
        copy(here, before);
        const size = move(here, step);
        iterations++;
        // Near a singular pose rounding alone makes steps of this size.
        if (size <= Math.max(STEP_TOLERANCE, 4e-16 / pivot)) {
          if (damping > 0 && isFlat(lengths, offset)) return end('singular', sum);
          copy(here, pose);
          return end('solved', sum);
        }
        if (iterations >= ITERATIONS) return end('unsettled', sum);
        let next = lengthEquations(rig, here, lengths, offset, equations);
        while (!(next <= sum + noise * (2 * Math.sqrt(sum) + noise))) {
          damping = Math.max(FIRST_DAMPING, damping * MORE_DAMPING);
          if (damping > MOST_DAMPING || iterations >= ITERATIONS) return end('unsettled', sum);
          copy(before, here);
          lengthEquations(rig, here, lengths, offset, equations);
          if (solveCholesky7(M, step, damping, floorOf(M)) > 0) move(here, step);
          iterations++;
          next = lengthEquations(rig, here, lengths, offset, equations);
        }
        sum = next;
        damping = damping < FIRST_DAMPING ? 0 : damping * LESS_DAMPING;
      }
    },
  };
}

/** What damping adds to every diagonal entry, so that a motion without any stiffness is damped too. */
function floorOf(M: Float64Array): number {
  return 1e-3 * Math.max(M[0]!, M[2]!, M[5]!);
}

function copy(from: Float64Array, to: Float64Array): void {
  for (let i = 0; i < 8; i++) to[i] = from[i]!;
}

/** Moves a pose by a step (p, rotation vector in base axes, grasp); returns its largest entry. */
function move(pose: Float64Array, step: Float64Array): number {
  const wx = step[3]!, wy = step[4]!, wz = step[5]!;
  pose[0] = pose[0]! + step[0]!;
  pose[1] = pose[1]! + step[1]!;
  pose[2] = pose[2]! + step[2]!;
  pose[7] = pose[7]! + step[6]!;
  // exp(w) q to second order, then norm 1: the error is of third order and the next step takes it out
  const angle2 = wx * wx + wy * wy + wz * wz;
  const s = angle2 < 1e-2 ? 0.5 - angle2 / 48 : Math.sin(Math.sqrt(angle2) / 2) / Math.sqrt(angle2);
  const c = angle2 < 1e-2 ? 1 - angle2 / 8 : Math.cos(Math.sqrt(angle2) / 2);
  const ex = s * wx, ey = s * wy, ez = s * wz;
  const x = pose[3]!, y = pose[4]!, z = pose[5]!, w = pose[6]!;
  pose[3] = c * x + ex * w + ey * z - ez * y;
  pose[4] = c * y - ex * z + ey * w + ez * x;
  pose[5] = c * z + ex * y - ey * x + ez * w;
  pose[6] = c * w - ex * x - ey * y - ez * z;
  normalise(pose);
  return Math.max(
    Math.abs(step[0]!), Math.abs(step[1]!), Math.abs(step[2]!), Math.abs(wx), Math.abs(wy), Math.abs(wz), Math.abs(step[6]!),
  );
}

function normalise(pose: Float64Array): void {
  const x = pose[3]!, y = pose[4]!, z = pose[5]!, w = pose[6]!;
  const inverse = 1 / Math.sqrt(x * x + y * y + z * z + w * w);
  pose[3] = x * inverse;
  pose[4] = y * inverse;
  pose[5] = z * inverse;
  pose[6] = w * inverse;
}

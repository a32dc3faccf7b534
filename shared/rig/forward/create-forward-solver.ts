import type { RigModel } from '../rig-model';
import { addLengthCurvature } from './add-length-curvature';
import { createLengthEquations, lengthEquations } from './length-equations';
import { DAMPING, FLOOR, PIVOT, solveCholesky7 } from './solve-cholesky7';

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
  const equations = createLengthEquations(rig.cableCount);
  const { M, h: step, sum: squares } = equations;
  const here = new Float64Array(8);
  const before = new Float64Array(8);
  const terms = new Float64Array(3);
  const stepSize = new Float64Array(1);
  const residual = new Float64Array(1).fill(Number.NaN);
  // m^2: sum of squares at the last good pose, and the most that the next one may have.
  const sum = new Float64Array(1);
  const most = new Float64Array(1);
  // m: what rounding makes of the root of the sum of squares; sums closer than that are equal.
  const noise = ROUNDING * Math.sqrt(rig.cableCount) * Math.max(...rig.exits.map(Math.abs));
  let status: ForwardStatus = 'missing';
  let iterations = 0;

  /** One step from `here`, Newton's or Gauss-Newton's, into `step`; false when no damping makes the matrix definite. */
  function findStep(lengths: ArrayLike<number>, offset: number): boolean {
    if (iterations >= GAUSS_NEWTON_STEPS) {
      const damping = terms[DAMPING]!;
      terms[DAMPING] = 0;
      addLengthCurvature(rig, here, lengths, offset, M);
      const solved = solveCholesky7(M, step, terms);
      terms[DAMPING] = damping;
      if (solved) return true;
      // Not a valley here: the way down is Gauss-Newton's.
      lengthEquations(rig, here, lengths, offset, equations);
    }
    setFloor(M, terms);
    while (!solveCholesky7(M, step, terms)) {
      if (!dampMore()) return false;
    }
    return true;
  }

  function dampMore(): boolean {
    terms[DAMPING] = Math.max(FIRST_DAMPING, terms[DAMPING]! * MORE_DAMPING);
    return terms[DAMPING]! <= MOST_DAMPING;
  }

  /** True when the lengths leave some motion from `here` free. */
  function isFlat(lengths: ArrayLike<number>, offset: number): boolean {
    lengthEquations(rig, here, lengths, offset, equations);
    terms[DAMPING] = 0;
    return !solveCholesky7(M, step, terms);
  }

  /** Shorter steps from `before` until one leaves no more than `most`; false when none does. */
  function retreat(lengths: ArrayLike<number>, offset: number): boolean {
    while (!(squares[0]! <= most[0]!)) {
      if (!dampMore() || iterations >= ITERATIONS) return false;
      copy(before, here);
      lengthEquations(rig, here, lengths, offset, equations);
      setFloor(M, terms);
      if (solveCholesky7(M, step, terms)) move(here, step, stepSize);
      iterations++;
      lengthEquations(rig, here, lengths, offset, equations);
    }
    return true;
  }

  function iterate(lengths: ArrayLike<number>, offset: number, pose: Float64Array): ForwardStatus {
    lengthEquations(rig, here, lengths, offset, equations);
    sum[0] = squares[0]!;
    if (!(sum[0]! < Infinity)) return 'missing';
    for (;;) {
      if (!findStep(lengths, offset)) return 'singular';
      copy(here, before);
      move(here, step, stepSize);
      iterations++;
      // Near a singular pose rounding alone makes steps of this size.
      if (stepSize[0]! <= Math.max(STEP_TOLERANCE, 4e-16 / terms[PIVOT]!)) {
        if (terms[DAMPING]! > 0 && isFlat(lengths, offset)) return 'singular';
        copy(here, pose);
        return 'solved';
      }
      if (iterations >= ITERATIONS) return 'unsettled';
      lengthEquations(rig, here, lengths, offset, equations);
      most[0] = sum[0]! + noise * (2 * Math.sqrt(sum[0]!) + noise);
      if (!retreat(lengths, offset)) return 'unsettled';
      sum[0] = squares[0]!;
      terms[DAMPING] = terms[DAMPING]! < FIRST_DAMPING ? 0 : terms[DAMPING]! * LESS_DAMPING;
    }
  }

  return {
    get status() {
      return status;
    },
    get residualRms() {
      return residual[0]!;
    },
    get iterations() {
      return iterations;
    },
    solve(lengths, offset, pose) {
      copy(pose, here);
      normalise(here);
      iterations = 0;
      terms[DAMPING] = 0;
      status = iterate(lengths, offset, pose);
      residual[0] = status === 'missing' ? Number.NaN : Math.sqrt(sum[0]! / rig.cableCount);
      return status === 'solved';
    },
  };
}

/** What damping adds to every diagonal entry, so that a motion without any stiffness is damped too. */
function setFloor(M: Float64Array, terms: Float64Array): void {
  terms[FLOOR] = 1e-3 * Math.max(M[0]!, M[2]!, M[5]!);
}

function copy(from: Float64Array, to: Float64Array): void {
  for (let i = 0; i < 8; i++) to[i] = from[i]!;
}

/** Moves a pose by a step (p, rotation vector in base axes, grasp); writes its largest entry into `size`. */
function move(pose: Float64Array, step: Float64Array, size: Float64Array): void {
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
  size[0] = Math.max(
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

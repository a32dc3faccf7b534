import { structureMatrix } from '../kinematics/structure-matrix';
import { nearestInPolytope } from '../linear-algebra/nearest-in-polytope';
import { NumericError } from '../numeric-error';
import type { Pose } from '../pose';
import type { RigModel } from '../rig-model';
import { balanceSpace, type BalanceSpace } from './balance-space';
import { nearestBalance } from './nearest-balance';
import { nearestToEqual } from './null-vector';
import { requireSeven } from './require-numbers';
import { spanWithinLimits } from './span-within-limits';
import { wrenchSize } from './wrench-size';

/** N. */
export type TensionLimits = { tensionMin: number; tensionMax: number };

/** A cable at a limit; cables are numbered from 1. */
export type ActiveLimit = { cable: number; limit: 'min' | 'max' };

export type TensionAnswer =
  | {
      feasible: true;
      /** n [N], within the limits, A t + w = 0. */
      tensions: Float64Array;
      activeLimits: ActiveLimit[];
      /** N: how far all tensions can move together along `direction` from here, [<= 0, >= 0]. */
      interval: [number, number];
      /** Null vector of the interval (norm 1, sum positive). */
      direction: Float64Array;
      rank: number;
    }
  | {
      feasible: false;
      /** N, moments over 0.1 m: size of the smallest wrench error that tensions within the limits leave. */
      shortBy: number;
      /** A t + w of the nearest tensions: the part of the wrench that is not balanced. */
      wrenchError: Float64Array;
      /** n [N]: tensions within the limits that come nearest. */
      tensions: Float64Array;
      activeLimits: ActiveLimit[];
      rank: number;
    };

/** N per N of the upper limit: below this a tension counts as being at its limit, a shortfall as rounding. */
const ROUNDING = 1e-10;

/**
 * Tensions that balance a wrench at a pose, as near as possible to the middle of the limits.
 *
 * Minimum of sum (t_i - tmid)^2 with A t + w = 0 and tensionMin <= t_i <= tensionMax. One spare cable: closed form
 * along the null vector, clamped to the feasible interval. More: quadratic programme in the null space. A pose that
 * lost rank is answered too: balanced wrenches get tensions, others are infeasible, and `rank` says why.
 *
 * @param wrench 7 numbers applied to the device from outside: force [N], moment about the palm origin in base axes [N m], grasp
 * @param limits N; the rig's own when absent
 * @throws NumericError BAD_REQUEST for numbers that are not finite or limits out of order, UNDEFINED when a cable has no length
 * @source Pott, Bruckmann and Mikelsons 2009 (one spare cable); Goldfarb and Idnani 1983 (more)
 */
export function distributeTensions(rig: RigModel, pose: Pose, wrench: ArrayLike<number>, limits: Partial<TensionLimits> = {}): TensionAnswer {
  requireSeven(wrench, 'A wrench');
  const min = limits.tensionMin ?? rig.tensionMin;
  const max = limits.tensionMax ?? rig.tensionMax;
  if (!(Number.isFinite(min) && Number.isFinite(max) && min <= max)) {
    throw new NumericError('BAD_REQUEST', 'Tension limits need two finite numbers, the lower one first.');
  }
  const n = rig.cableCount;
  const A = structureMatrix(rig, pose, new Float64Array(7 * n));
  const space = balanceSpace(A, n);
  const rounding = ROUNDING * Math.max(Math.abs(max), Math.abs(min));
  const within = wrenchSize(rig, space.outOfReach(wrench)) <= rounding ? withinLimits(space, wrench, min, max, rounding) : null;
  if (within === null) {
    const nearest = nearestBalance(rig, A, wrench, min, max);
    // Feasible by no more than rounding: the two methods may disagree on the last digit of a single point.
    if (nearest.shortBy > rounding) return { feasible: false, ...nearest, activeLimits: activeLimits(nearest.tensions, min, max, rounding), rank: space.rank };
    return answer(nearest.tensions, space, min, max, rounding);
  }
  return answer(within, space, min, max, rounding);
}

/** The minimiser, or null when the limits leave nothing. */
function withinLimits(space: BalanceSpace, wrench: ArrayLike<number>, min: number, max: number, rounding: number): Float64Array | null {
  const smallest = space.smallest(wrench);
  const middle = (min + max) / 2;
  const { basis } = space;
  // Least-squares point: tmid projected on the basis. `smallest` is at right angles to the basis already.
  const free = Float64Array.from(basis, (vector) => vector.reduce((sum, value, i) => sum + value * (middle - smallest[i]!), 0));
  let z: Float64Array | null;
  if (basis.length === 1) {
    const [first, last] = spanWithinLimits(smallest, basis[0]!, min, max, rounding, new Float64Array(2));
    z = first! > last! + rounding ? null : Float64Array.of(first! > last! ? (first! + last!) / 2 : Math.min(Math.max(free[0]!, first!), last!));
  } else {
    z = nearestInPolytope(free, ...limitRows(basis, smallest, min, max), rounding * 1e-2);
  }
  if (z === null) return null;
  const tensions = smallest.slice();
  basis.forEach((vector, j) => {
    for (let i = 0; i < tensions.length; i++) tensions[i] = tensions[i]! + z[j]! * vector[i]!;
  });
  return tensions.map((value) => Math.min(Math.max(value, min), max));
}

/** Limits as half-spaces of the coordinates along the basis: normals . z >= bounds. */
function limitRows(basis: readonly Float64Array[], from: Float64Array, min: number, max: number): [Float64Array[], Float64Array] {
  const rows = Array.from(from, (_, i) => Float64Array.from(basis, (vector) => vector[i]!));
  const bounds = [...from.map((at) => min - at), ...from.map((at) => at - max)];
  return [[...rows, ...rows.map((row) => row.map((value) => -value))], Float64Array.from(bounds)];
}

function answer(tensions: Float64Array, space: BalanceSpace, min: number, max: number, rounding: number): TensionAnswer {
  const direction = nearestToEqual(space.basis);
  const [first, last] = spanWithinLimits(tensions, direction, min, max, rounding, new Float64Array(2));
  return {
    feasible: true,
    tensions,
    activeLimits: activeLimits(tensions, min, max, rounding),
    interval: [Math.min(first!, 0), Math.max(last!, 0)],
    direction,
    rank: space.rank,
  };
}

function activeLimits(tensions: Float64Array, min: number, max: number, rounding: number): ActiveLimit[] {
  const found: ActiveLimit[] = [];
  tensions.forEach((tension, i) => {
    if (tension <= min + rounding) found.push({ cable: i + 1, limit: 'min' });
    else if (tension >= max - rounding) found.push({ cable: i + 1, limit: 'max' });
  });
  return found;
}

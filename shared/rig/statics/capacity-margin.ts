import { structureMatrix } from '../kinematics/structure-matrix';
import { conditionBound, createRowFactor, factorRows, nullDirection } from '../linear-algebra/row-factor';
import type { Pose } from '../pose';
import type { RigModel } from '../rig-model';
import { nearestBalance } from './nearest-balance';
import { requireSeven } from './require-numbers';
import { rankOf } from './rank-of';
import { wrenchWeights } from './wrench-size';

export type CapacityMargin = {
  /** N, moments over 0.1 m: how much the wrench may still grow in the worst direction; below zero when it is already too much. */
  margin: number;
  /** Direction (7, in N and N m, size 1 N with moments over 0.1 m) in which the wrench leaves soonest; null when the rank is below 7. */
  weakest: Float64Array | null;
};

/** Six columns closer to dependent than this have no normal of their own; their facet is found from others. No unit. */
const FLAT = 1e-9;

/**
 * Capacity margin: signed distance of a wrench from the boundary of all wrenches that the limits allow at a pose.
 *
 * The allowed wrenches are a zonotope; each facet's normal is at right angles to six cables. Moments are divided by
 * 0.1 m first, so the distance is in newtons. At a pose that lost rank the zonotope is flat and has no inside: the
 * margin is then zero for a wrench within it, otherwise minus the distance to it.
 *
 * @param wrench 7 numbers, applied to the device from outside
 * @throws NumericError BAD_REQUEST, UNDEFINED when a cable has no length
 * @source Bouchard, Gosselin and Moore 2010 (zonotope facets); Guay, Cardou, Cruz-Ruiz and Caro 2014 (capacity margin) (cited from memory)
 */
export function capacityMargin(rig: RigModel, pose: Pose, wrench: ArrayLike<number>): CapacityMargin {
  requireSeven(wrench, 'A wrench');
  const n = rig.cableCount;
  const A = structureMatrix(rig, pose, new Float64Array(7 * n));
  if (rankOf(A, n) < 7) {
    const { shortBy } = nearestBalance(rig, A, wrench, rig.tensionMin, rig.tensionMax);
    return { margin: shortBy > 1e-9 * rig.tensionMax ? -shortBy : 0, weakest: null };
  }
  const weights = wrenchWeights(rig);
  const columns = Array.from({ length: n }, (_, i) => weights.map((weight, row) => weight * A[row * n + i]!));
  const balance = weights.map((weight, row) => -weight * wrench[row]!);
  const factor = createRowFactor(6, 7);
  const rows = new Float64Array(42);
  const normal = new Float64Array(7);
  let margin = Infinity;
  const weakest = new Float64Array(7);
  for (const six of choices(n, 6)) {
    six.forEach((i, k) => rows.set(columns[i]!, 7 * k));
    if (conditionBound(factorRows(rows, factor)) < FLAT) continue;
    nullDirection(factor, 0, normal);
    for (const side of [1, -1]) {
      const distance = support(columns, normal, side, rig) - side * dot(normal, balance);
      if (distance >= margin) continue;
      margin = distance;
      // The tensions' pull runs out along the normal, so the wrench from outside runs out against it.
      for (let row = 0; row < 7; row++) weakest[row] = (-side * normal[row]!) / weights[row]!;
    }
  }
  return { margin, weakest };
}

/** Farthest point of the zonotope along side x normal, N. */
function support(columns: readonly Float64Array[], normal: Float64Array, side: number, rig: RigModel): number {
  let sum = 0;
  for (const column of columns) {
    const pull = side * dot(normal, column);
    sum += pull * (pull > 0 ? rig.tensionMax : rig.tensionMin);
  }
  return sum;
}

function dot(a: Float64Array, b: Float64Array): number {
  let sum = 0;
  for (let i = 0; i < a.length; i++) sum += a[i]! * b[i]!;
  return sum;
}

/** All ways to choose `k` of the numbers 0 to n - 1, each ascending. */
function* choices(n: number, k: number, from = 0): Generator<number[]> {
  if (k === 0) {
    yield [];
    return;
  }
  for (let i = from; i <= n - k; i++) for (const rest of choices(n, k - 1, i + 1)) yield [i, ...rest];
}

import { structureMatrix } from '../kinematics/structure-matrix';
import { maximise } from '../linear-algebra/simplex';
import type { Pose } from '../pose';
import type { RigModel } from '../rig-model';
import { balanceSpace } from './balance-space';
import { nearestToEqual } from './null-vector';

export type Closure = {
  rank: number;
  /** Null vector (norm 1, sum positive) that reaches the closure index; null when the rank is below 7. */
  n: Float64Array | null;
  /** True when cables that can only pull can balance any wrench here, limits aside. */
  closure: boolean;
  /** min(n) / max(n): 1 when all cables share alike, below 0 outside the closure workspace; null when n is. */
  closureIndex: number | null;
};

/**
 * Wrench closure of a rig at a pose.
 *
 * @throws NumericError UNDEFINED when a cable has no length at this pose
 * @source Gouttefarde and Gosselin 2006: full rank and a null vector with all entries positive
 */
export function closure(rig: RigModel, pose: Pose): Closure {
  const A = structureMatrix(rig, pose, new Float64Array(7 * rig.cableCount));
  return closureOf(A, rig.cableCount);
}

/**
 * Wrench closure of a structure matrix (7 x n row-major).
 *
 * With more than one spare cable n is the null vector with the best min/max, found by a linear programme: largest s
 * with s <= n_i <= 1. Where none is positive, n is the one nearest to equal tensions, and the index is below zero.
 */
export function closureOf(A: Float64Array, n: number): Closure {
  const { rank, basis } = balanceSpace(A, n);
  if (rank < 7 || basis.length === 0) return { rank, n: null, closure: false, closureIndex: null };
  const vector = (basis.length > 1 ? mostEven(basis) : null) ?? nearestToEqual(basis);
  const least = vector.reduce((a, b) => Math.min(a, b), Infinity);
  const most = vector.reduce((a, b) => Math.max(a, b), -Infinity);
  return { rank, n: vector, closure: least > 0, closureIndex: least / most };
}

/** Below this best share of the smallest tension in the largest, the programme's answer is rounding. No unit. */
const LEAST_SHARE = 1e-12;

/** The all-positive vector of the span with the largest min/max, of norm 1; null when there is none. */
function mostEven(basis: readonly Float64Array[]): Float64Array | null {
  const k = basis.length;
  const n = basis[0]!.length;
  // Unknowns: s, then the coordinates z split into z+ and z-, because the programme wants them positive.
  const entry = (i: number) => basis.map((vector) => vector[i]!);
  const G: number[][] = [];
  for (let i = 0; i < n; i++) G.push([1, ...entry(i).map((v) => -v), ...entry(i)]);
  for (let i = 0; i < n; i++) G.push([0, ...entry(i), ...entry(i).map((v) => -v)]);
  const h = G.map((_, row) => (row < n ? 0 : 1));
  const x = maximise([1, ...new Array<number>(2 * k).fill(0)], G, h);
  if (x[0]! < LEAST_SHARE) return null;
  const vector = new Float64Array(n);
  basis.forEach((direction, j) => {
    const z = x[1 + j]! - x[1 + k + j]!;
    for (let i = 0; i < n; i++) vector[i] = vector[i]! + z * direction[i]!;
  });
  const norm = Math.hypot(...vector);
  return vector.map((value) => value / norm);
}

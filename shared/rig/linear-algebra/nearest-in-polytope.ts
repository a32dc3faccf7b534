import { NumericError } from '../numeric-error';

/**
 * The point nearest to `from` (2-norm) with normals_j . x >= bounds_j for every j, or null when no point has.
 *
 * Dual active set for a quadratic programme with unit Hessian: start at the free optimum and take in the most violated
 * constraint, dropping those whose multiplier would turn negative.
 *
 * @param normals   rows of k numbers
 * @param tolerance how far outside still counts as inside, in the unit of the bounds
 * @source Goldfarb and Idnani 1983 (cited from memory)
 */
export function nearestInPolytope(from: Float64Array, normals: readonly Float64Array[], bounds: Float64Array, tolerance: number): Float64Array | null {
  const x = from.slice();
  const active: number[] = [];
  const multipliers: number[] = [];
  for (let round = 0; round < 20 * (normals.length + 5); round++) {
    const violated = mostViolated(x, normals, bounds, active, tolerance);
    if (violated < 0) return x;
    if (!takeIn(violated, x, normals, bounds, active, multipliers)) return null;
  }
  throw new NumericError('NO_CONVERGENCE', 'The nearest allowed point was not found; check that every number is finite.');
}

function mostViolated(x: Float64Array, normals: readonly Float64Array[], bounds: Float64Array, active: readonly number[], tolerance: number): number {
  let worst = -1;
  let worstGap = tolerance;
  normals.forEach((normal, j) => {
    const gap = bounds[j]! - dot(normal, x);
    if (gap > worstGap && !active.includes(j)) {
      worst = j;
      worstGap = gap;
    }
  });
  return worst;
}

/** Makes constraint j hold with equality, dropping others as needed; false when they contradict it. */
function takeIn(j: number, x: Float64Array, normals: readonly Float64Array[], bounds: Float64Array, active: number[], multipliers: number[]): boolean {
  const normal = normals[j]!;
  let multiplier = 0;
  for (;;) {
    const { shares, rest } = resolve(normal, active.map((k) => normals[k]!));
    const slope = dot(rest, normal);
    const free = slope > 1e-18 * dot(normal, normal) && dot(rest, rest) > 1e-20 * dot(normal, normal);
    const full = free ? (bounds[j]! - dot(normal, x)) / slope : Infinity;
    let dropping = -1;
    let partial = Infinity;
    shares.forEach((share, k) => {
      if (share > 0 && multipliers[k]! / share < partial) {
        partial = multipliers[k]! / share;
        dropping = k;
      }
    });
    const step = Math.min(full, partial);
    if (step === Infinity) return false;
    if (free) for (let i = 0; i < x.length; i++) x[i] = x[i]! + step * rest[i]!;
    shares.forEach((share, k) => (multipliers[k] = multipliers[k]! - step * share));
    multiplier += step;
    if (full <= partial) {
      active.push(j);
      multipliers.push(multiplier);
      return true;
    }
    active.splice(dropping, 1);
    multipliers.splice(dropping, 1);
  }
}

/** normal = sum shares_k basis_k + rest, with rest at right angles to all of them (Gram-Schmidt, twice for accuracy). */
function resolve(normal: Float64Array, basis: readonly Float64Array[]): { shares: number[]; rest: Float64Array } {
  const directions: Float64Array[] = [];
  const R: number[][] = [];
  basis.forEach((vector, k) => {
    const { rest, along } = takeOut(vector, directions);
    const norm = Math.sqrt(dot(rest, rest));
    directions.push(rest.map((value) => value / norm));
    R[k] = [...along, norm];
  });
  const { rest, along } = takeOut(normal, directions);
  const shares = new Array<number>(basis.length).fill(0);
  for (let k = basis.length - 1; k >= 0; k--) {
    let sum = along[k]!;
    for (let later = k + 1; later < basis.length; later++) sum -= R[later]![k]! * shares[later]!;
    shares[k] = sum / R[k]![k]!;
  }
  return { shares, rest };
}

function takeOut(vector: Float64Array, directions: readonly Float64Array[]): { rest: Float64Array; along: number[] } {
  const rest = vector.slice();
  const along = directions.map(() => 0);
  for (let pass = 0; pass < 2; pass++) {
    directions.forEach((direction, k) => {
      const share = dot(direction, rest);
      along[k] = along[k]! + share;
      for (let i = 0; i < rest.length; i++) rest[i] = rest[i]! - share * direction[i]!;
    });
  }
  return { rest, along };
}

function dot(a: Float64Array, b: Float64Array): number {
  let sum = 0;
  for (let i = 0; i < a.length; i++) sum += a[i]! * b[i]!;
  return sum;
}

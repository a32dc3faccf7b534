/**
 * What the cables did to the hand at each sample of a chunk: its wrench by balance, w = -A t, and whether the rig could have
 * rendered that wrench within the controller's limits.
 *
 * The recorded tensions balance the wrench: where they lie within the limits it could be rendered. Elsewhere, with one spare
 * cable, every other solution is t + lambda n along the null vector n of the structure matrix (Pott, Bruckmann and Mikelsons
 * 2009), and those within the limits are an interval of lambda. With more spare cables the whole distribution is solved.
 */
import type { ChannelMap } from '../recording/channels';
import type { Chunk } from '../recording/chunk';
import { structureMatrix } from '../rig/kinematics/structure-matrix';
import { NumericError } from '../rig/numeric-error';
import type { Quat, Vec3 } from '../rig/pose';
import type { RigModel } from '../rig/rig-model';
import { distributeTensions } from '../rig/statics/distribute-tensions';

export interface HandStaticsColumns {
  /** Seven columns: force, N, and moment about the palm origin, N m, in base axes, grasp force, N or N m; NaN where not measured. */
  readonly wrench: readonly Float64Array[];
  /** 1: tensions within the limits balance the wrench; 0: none do; NaN: not measured, or the pose has lost a rank. */
  readonly feasible: Float64Array;
}

export type HandStatics = (chunk: Chunk) => HandStaticsColumns;

const ROWS = 7;
/** Pivots below this share of the largest count as zero: the pose has lost a rank. */
const RANK_TOLERANCE = 1e-9;
/** A pivot above this share of the largest entry is good enough without looking further. */
const GOOD_PIVOT = 1e-3;

/**
 * Makes the statics of a rig. The columns it returns are its own memory and hold until the next call.
 */
export function handStatics(rig: RigModel, map: ChannelMap): HandStatics {
  const n = rig.cableCount;
  const { tensionMin, tensionMax } = rig;
  const matrix = new Float64Array(ROWS * n);
  const p: Vec3 = [0, 0, 0];
  const q: Quat = [0, 0, 0, 1];
  const pose = { p, q, grasp: 0 };
  const tension = new Float64Array(n);
  const wrench = new Float64Array(ROWS);
  let columns: Float64Array[] = [];
  const direction = new Float64Array(n);
  const order = new Int32Array(n);
  let feasible = new Float64Array(0);

  const alongNullVector = (k: number): void => {
    if (!nullVectorOf(matrix, n, order, direction)) {
      feasible[k] = Number.NaN;
      return;
    }
    let low = -Infinity;
    let high = Infinity;
    for (let i = 0; i < n; i += 1) {
      const d = direction[i] as number;
      const t = tension[i] as number;
      if (d === 0) {
        if (t < tensionMin || t > tensionMax) high = -Infinity;
        continue;
      }
      const a = (tensionMin - t) / d;
      const b = (tensionMax - t) / d;
      low = Math.max(low, Math.min(a, b));
      high = Math.min(high, Math.max(a, b));
    }
    feasible[k] = low <= high ? 1 : 0;
  };

  const bySolving = (k: number): void => {
    feasible[k] = distributeTensions(rig, pose, wrench).feasible ? 1 : 0;
  };

  return (chunk) => {
    if (chunk.count > feasible.length) {
      feasible = new Float64Array(chunk.count);
      columns = Array.from({ length: ROWS }, () => new Float64Array(chunk.count));
    }
    const channel = (index: number | undefined) => chunk.columns[index as number] as Float32Array;
    const poses = map.pose.map(channel);
    const grasp = channel(map.grasp);
    const tensions = map.tensions.map(channel);
    for (let k = 0; k < chunk.count; k += 1) {
      let known = 0;
      for (let axis = 0; axis < 3; axis += 1) known += p[axis] = (poses[axis] as Float32Array)[k] as number;
      for (let axis = 0; axis < 4; axis += 1) known += q[axis] = (poses[3 + axis] as Float32Array)[k] as number;
      known += pose.grasp = grasp[k] as number;
      let within = true;
      for (let i = 0; i < n; i += 1) {
        const t = (tensions[i] as Float32Array)[k] as number;
        tension[i] = t;
        known += t;
        if (t < tensionMin || t > tensionMax) within = false;
      }
      if (known !== known || !fills(matrix, rig, pose)) {
        feasible[k] = Number.NaN;
        for (let row = 0; row < ROWS; row += 1) (columns[row] as Float64Array)[k] = Number.NaN;
        continue;
      }
      for (let row = 0; row < ROWS; row += 1) {
        let sum = 0;
        for (let i = 0; i < n; i += 1) sum -= (matrix[row * n + i] as number) * (tension[i] as number);
        wrench[row] = sum;
        (columns[row] as Float64Array)[k] = sum;
      }
      if (within) feasible[k] = 1;
      else if (n === ROWS + 1) alongNullVector(k);
      else bySolving(k);
    }
    return { wrench: columns.map((column) => column.subarray(0, chunk.count)), feasible: feasible.subarray(0, chunk.count) };
  };
}

/** False where the pose gives no matrix: no rotation, a cable without length. */
function fills(matrix: Float64Array, rig: RigModel, pose: { p: Vec3; q: Quat; grasp: number }): boolean {
  const [x, y, z, w] = pose.q;
  if (x * x + y * y + z * z + w * w === 0) return false;
  try {
    structureMatrix(rig, pose, matrix);
    return true;
  } catch (error) {
    if (error instanceof NumericError) return false;
    throw error;
  }
}

/**
 * Null vector of a 7 x 8 matrix by elimination with pivoting, in place; no memory is taken.
 *
 * @param out norm 1; its sign does not matter for an interval
 * @returns false when the rank is below 7
 */
function nullVectorOf(a: Float64Array, n: number, order: Int32Array, out: Float64Array): boolean {
  for (let i = 0; i < n; i += 1) order[i] = i;
  let largest = 0;
  for (let i = 0; i < ROWS * n; i += 1) largest = Math.max(largest, Math.abs(a[i] as number));
  for (let step = 0; step < ROWS; step += 1) {
    let best = -1;
    let row = step;
    let column = step;
    // Down its own column first; only where nothing of size stands there is the whole rest looked through.
    for (let r = step; r < ROWS; r += 1) {
      const size = Math.abs(a[r * n + step] as number);
      if (size > best) {
        best = size;
        row = r;
      }
    }
    if (best <= GOOD_PIVOT * largest) {
      best = -1;
      for (let r = step; r < ROWS; r += 1) {
        for (let c = step; c < n; c += 1) {
          const size = Math.abs(a[r * n + c] as number);
          if (size > best) {
            best = size;
            row = r;
            column = c;
          }
        }
      }
    }
    if (best <= largest * RANK_TOLERANCE) return false;
    if (row !== step) swapRows(a, n, row, step);
    if (column !== step) swapColumns(a, n, column, step, order);
    const pivot = a[step * n + step] as number;
    for (let r = step + 1; r < ROWS; r += 1) {
      const factor = (a[r * n + step] as number) / pivot;
      if (factor === 0) continue;
      for (let c = step + 1; c < n; c += 1) a[r * n + c] = (a[r * n + c] as number) - factor * (a[step * n + c] as number);
    }
  }
  let squares = 1;
  out[order[ROWS] as number] = 1;
  for (let r = ROWS - 1; r >= 0; r -= 1) {
    let sum = 0;
    for (let c = r + 1; c < n; c += 1) sum += (a[r * n + c] as number) * (out[order[c] as number] as number);
    const value = -sum / (a[r * n + r] as number);
    out[order[r] as number] = value;
    squares += value * value;
  }
  const norm = Math.sqrt(squares);
  for (let i = 0; i < n; i += 1) out[i] = (out[i] as number) / norm;
  return true;
}

function swapRows(a: Float64Array, n: number, one: number, two: number): void {
  for (let c = 0; c < n; c += 1) {
    const kept = a[one * n + c] as number;
    a[one * n + c] = a[two * n + c] as number;
    a[two * n + c] = kept;
  }
}

function swapColumns(a: Float64Array, n: number, one: number, two: number, order: Int32Array): void {
  for (let r = 0; r < ROWS; r += 1) {
    const kept = a[r * n + one] as number;
    a[r * n + one] = a[r * n + two] as number;
    a[r * n + two] = kept;
  }
  const kept = order[one] as number;
  order[one] = order[two] as number;
  order[two] = kept;
}

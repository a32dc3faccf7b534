/** Wrench of the hand on the device along a chunk, from the recorded tensions by balance: w = -A t. */
import type { ChannelMap } from '../recording/channels';
import type { Chunk } from '../recording/chunk';
import { structureMatrix } from '../rig/kinematics/structure-matrix';
import { NumericError } from '../rig/numeric-error';
import type { Quat, Vec3 } from '../rig/pose';
import type { RigModel } from '../rig/rig-model';

export type HandWrench = (chunk: Chunk) => readonly Float64Array[];

/**
 * Makes the wrench of a rig. The columns it returns are its own memory and hold until the next call.
 *
 * @returns seven columns: force, N, and moment about the palm origin, N m, in base axes, grasp force, N or N m; NaN
 *          where pose or a tension was not measured, or where a cable has no length
 */
export function handWrench(rig: RigModel, map: ChannelMap): HandWrench {
  const n = rig.cableCount;
  const matrix = new Float64Array(7 * n);
  const p: Vec3 = [0, 0, 0];
  const q: Quat = [0, 0, 0, 1];
  const pose = { p, q, grasp: 0 };
  const tension = new Float64Array(n);
  let room = 0;
  let columns: Float64Array[] = [];
  return (chunk) => {
    if (chunk.count > room) {
      room = chunk.count;
      columns = Array.from({ length: 7 }, () => new Float64Array(room));
    }
    const channel = (index: number | undefined) => chunk.columns[index as number] as Float32Array;
    const poses = map.pose.map(channel);
    const grasp = channel(map.grasp);
    const tensions = map.tensions.map(channel);
    for (let k = 0; k < chunk.count; k += 1) {
      for (let axis = 0; axis < 3; axis += 1) p[axis] = (poses[axis] as Float32Array)[k] as number;
      for (let axis = 0; axis < 4; axis += 1) q[axis] = (poses[3 + axis] as Float32Array)[k] as number;
      pose.grasp = grasp[k] as number;
      for (let i = 0; i < n; i += 1) tension[i] = (tensions[i] as Float32Array)[k] as number;
      const known = fill(matrix, rig, pose);
      for (let row = 0; row < 7; row += 1) {
        let sum = 0;
        for (let i = 0; i < n; i += 1) sum -= (matrix[row * n + i] as number) * (tension[i] as number);
        (columns[row] as Float64Array)[k] = known ? sum : Number.NaN;
      }
    }
    return columns;
  };
}

/** False where the pose gives no matrix: not measured, no rotation, a cable without length. */
function fill(matrix: Float64Array, rig: RigModel, pose: { p: Vec3; q: Quat; grasp: number }): boolean {
  const [x, y, z, w] = pose.q;
  const sum = pose.p[0] + pose.p[1] + pose.p[2] + x + y + z + w + pose.grasp;
  if (sum !== sum || x * x + y * y + z * z + w * w === 0) return false;
  try {
    structureMatrix(rig, pose, matrix);
    return true;
  } catch (error) {
    if (error instanceof NumericError) return false;
    throw error;
  }
}

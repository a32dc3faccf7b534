/** Length residual of a chunk: every measured cable length minus the one that the measured pose asks for. */
import type { ChannelMap } from '../recording/channels';
import type { Chunk } from '../recording/chunk';
import { attachmentInPalm } from '../rig/kinematics/attachment-in-palm';
import type { RigModel } from '../rig/rig-model';

export type LengthResidual = (chunk: Chunk) => readonly Float64Array[];

/**
 * Makes the residual of a rig. The columns it returns are its own memory and hold until the next call.
 *
 * Recorded quaternions carry the rounding of their file, so they are brought to norm 1 here.
 * @returns one column a cable, m; NaN where pose or length was not measured, or where the quaternion is zero
 */
export function lengthResidual(rig: RigModel, map: ChannelMap): LengthResidual {
  const n = rig.cableCount;
  let room = 0;
  let columns: Float64Array[] = [];
  const b = new Float64Array(9);
  const r = new Float64Array(9);
  return (chunk) => {
    if (chunk.count > room) {
      room = chunk.count;
      columns = Array.from({ length: n }, () => new Float64Array(room));
    }
    const channel = (index: number | undefined) => chunk.columns[index as number] as Float32Array;
    const [x, y, z, qx, qy, qz, qw] = map.pose.map(channel) as [Float32Array, Float32Array, Float32Array, Float32Array, Float32Array, Float32Array, Float32Array];
    const grasp = channel(map.grasp);
    const lengths = map.lengths.map(channel);
    for (let k = 0; k < chunk.count; k += 1) {
      rotation(qx[k] as number, qy[k] as number, qz[k] as number, qw[k] as number, r);
      const px = x[k] as number;
      const py = y[k] as number;
      const pz = z[k] as number;
      for (let i = 0; i < n; i += 1) {
        attachmentInPalm(rig, i, grasp[k] as number, b);
        const bx = b[0] as number;
        const by = b[1] as number;
        const bz = b[2] as number;
        const dx = (rig.exits[3 * i] as number) - px - (r[0] as number) * bx - (r[1] as number) * by - (r[2] as number) * bz;
        const dy = (rig.exits[3 * i + 1] as number) - py - (r[3] as number) * bx - (r[4] as number) * by - (r[5] as number) * bz;
        const dz = (rig.exits[3 * i + 2] as number) - pz - (r[6] as number) * bx - (r[7] as number) * by - (r[8] as number) * bz;
        (columns[i] as Float64Array)[k] = ((lengths[i] as Float32Array)[k] as number) - Math.sqrt(dx * dx + dy * dy + dz * dz);
      }
    }
    return columns;
  };
}

/** Row-major rotation of a quaternion of any norm; all NaN for a zero one (0/0), which the residual then passes on as "not measured". */
function rotation(x: number, y: number, z: number, w: number, r: Float64Array): void {
  const norm2 = x * x + y * y + z * z + w * w;
  const s = norm2 > 0 ? 2 / norm2 : Number.NaN;
  r[0] = 1 - s * (y * y + z * z);
  r[1] = s * (x * y - z * w);
  r[2] = s * (x * z + y * w);
  r[3] = s * (x * y + z * w);
  r[4] = 1 - s * (x * x + z * z);
  r[5] = s * (y * z - x * w);
  r[6] = s * (x * z - y * w);
  r[7] = s * (y * z + x * w);
  r[8] = 1 - s * (x * x + y * y);
}

/**
 * Size of the force between hand and device, from the cables: the force part of the balance w = -A t of shared/rig, at
 * the recorded pose. Over buckets: of the mean pose and the mean tensions. Not a number where any of them is missing.
 */
import type { ChannelMap } from '@shared/recording/channels';
import type { Pose } from '@shared/rig/pose';
import type { RigModel } from '@shared/rig/rig-model';
import { wrenchFromTensions } from '@shared/rig/statics/wrench-from-tensions';
import type { Stretch } from '../stretch';

/** More points than this a stretch are not computed one by one; neighbours hold their value. */
const MOST_POINTS = 2048;

/** @returns N, one per sample or bucket */
export function handForce(stretch: Stretch, channels: ChannelMap, rig: RigModel): Float32Array {
  const { count, mean } = stretch;
  const force = new Float32Array(count).fill(Number.NaN);
  if (rig.cableCount !== channels.cableCount) return force;
  const wrench = new Float64Array(7);
  const step = Math.max(1, Math.ceil(count / MOST_POINTS));
  for (let i = 0; i < count; i += step) {
    const read = (channel: number) => mean[channel * count + i] ?? Number.NaN;
    const size = forceAt(read, channels, rig, wrench);
    force.fill(size, i, Math.min(count, i + step));
  }
  return force;
}

/** Force part of the hand's wrench at one moment, N; NaN when a number is missing. `wrench` keeps all seven parts. */
export function forceAt(read: (channel: number) => number, channels: ChannelMap, rig: RigModel, wrench: Float64Array): number {
  wrench.fill(Number.NaN);
  const pose = poseOf(read, channels);
  const tensions = channels.tensions.map(read);
  if (!pose || !tensions.every(Number.isFinite) || tensions.length !== rig.cableCount) return Number.NaN;
  wrenchFromTensions(rig, pose, tensions, wrench);
  return Math.hypot(wrench[0] ?? Number.NaN, wrench[1] ?? Number.NaN, wrench[2] ?? Number.NaN);
}

/** The pose of a moment; null when a number of it is missing. */
export function poseOf(read: (channel: number) => number, channels: ChannelMap): Pose | null {
  const [x, y, z, qx, qy, qz, qw] = channels.pose.map(read) as [number, number, number, number, number, number, number];
  const grasp = read(channels.grasp);
  if (![x, y, z, qx, qy, qz, qw, grasp].every(Number.isFinite) || Math.hypot(qx, qy, qz, qw) < 1e-6) return null;
  return { p: [x, y, z], q: [qx, qy, qz, qw], grasp };
}

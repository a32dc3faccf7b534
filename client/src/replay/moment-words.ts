/** A moment in words and figures, for the table of the moment and for voices. */
import type { ChannelMap } from '@shared/recording/channels';
import type { RigModel } from '@shared/rig/rig-model';
import { forceAt, poseOf } from './ribbons/hand-force';
import type { Moment } from './source';
import { stateOf, type StringState, type TensionLimits } from './stave/string-runs';

export const stateWords: Readonly<Record<StringState, string>> = {
  taut: 'taut',
  near: 'near the limit',
  saturated: 'at its limit',
  slack: 'slack',
  missing: 'not measured',
};

export interface CableMoment {
  readonly cable: number;
  /** N; NaN when not measured. */
  readonly tensionN: number;
  /** m; NaN when not measured. */
  readonly lengthM: number;
  readonly state: StringState;
}

export function cablesAt(moment: Moment, channels: ChannelMap, limits: TensionLimits): CableMoment[] {
  return channels.tensions.map((channel, i) => {
    const tensionN = moment.values[channel] ?? Number.NaN;
    return { cable: i + 1, tensionN, lengthM: moment.values[channels.lengths[i] ?? -1] ?? Number.NaN, state: stateOf(tensionN, tensionN, limits, 'taut') };
  });
}

/** What a voice says of the cables: only those that are not simply taut. */
export function cablesInWords(moment: Moment, channels: ChannelMap, limits: TensionLimits): string {
  if (moment.known === 'gap') return 'nothing was recorded here';
  if (moment.known === 'outside') return 'outside the recording';
  if (moment.known === 'loading') return 'loading';
  const cables = cablesAt(moment, channels, limits);
  if (cables.every(({ state }) => state === 'missing')) return 'no cable was measured';
  const told = cables.filter(({ state }) => state !== 'taut');
  if (told.length === 0) return 'all cables taut';
  return told.map(({ cable, state, tensionN }) => `cable ${cable} ${stateWords[state]}${state === 'missing' ? '' : `, ${tensionN.toFixed(1)} newtons`}`).join('; ');
}

export interface HandMoment {
  /** Distance of the palm origin from its home, m. */
  readonly fromHomeM: number;
  /** Angle turned from home, rad. */
  readonly turnedRad: number;
  /** m or rad by the rig's grasp. */
  readonly grasp: number;
  /** N. */
  readonly forceN: number;
}

/** Null when the pose was not measured. `wrench` takes the seven parts of the hand's wrench. */
export function handAt(moment: Moment, channels: ChannelMap, rig: RigModel, wrench: Float64Array): HandMoment | null {
  const read = (channel: number) => moment.values[channel] ?? Number.NaN;
  const pose = poseOf(read, channels);
  if (!pose) return null;
  const { home } = rig;
  const norm = Math.hypot(...pose.q);
  const dot = Math.abs(pose.q.reduce((sum, part, i) => sum + part * (home.q[i] ?? 0), 0)) / norm;
  return {
    fromHomeM: Math.hypot(pose.p[0] - home.p[0], pose.p[1] - home.p[1], pose.p[2] - home.p[2]),
    turnedRad: 2 * Math.acos(Math.min(1, dot)),
    grasp: pose.grasp,
    forceN: forceAt(read, channels, rig, wrench),
  };
}

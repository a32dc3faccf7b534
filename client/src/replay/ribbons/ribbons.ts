/**
 * The ribbons under the strings: one measure each, over the same time. A ribbon is data, so that further ones (a
 * measured channel, the closure index, a tremor band) are a line here.
 */
import type { ChannelMap } from '@shared/recording/channels';
import type { RigModel } from '@shared/rig/rig-model';
import type { Series } from '../stave/columns';
import type { Stretch } from '../stretch';
import { handForce } from './hand-force';
import { handSpeed, SPEED_WINDOW_S } from './hand-speed';

export interface Ribbon {
  readonly id: string;
  readonly title: string;
  readonly unit: string;
  /** Recorded SI value to the shown unit. */
  readonly scale: number;
  readonly decimals: number;
  /** Fixed ends of the picture in SI; a null end follows the data. */
  readonly low: number | null;
  readonly high: number | null;
  /** How it is computed, for the reader who asks. */
  readonly method: string;
  series(stretch: Stretch): Series;
}

/** Derived columns live as long as the stretch they came from. */
function derived(compute: (stretch: Stretch) => Float32Array): (stretch: Stretch) => Series {
  const known = new WeakMap<Stretch, Series>();
  return (stretch) => {
    const had = known.get(stretch);
    if (had) return had;
    const values = compute(stretch);
    const series: Series = { min: values, max: values, mean: values, offset: 0 };
    known.set(stretch, series);
    return series;
  };
}

export const channelSeries = (stretch: Stretch, channel: number): Series => ({ min: stretch.min, max: stretch.max, mean: stretch.mean, offset: channel * stretch.count });

export function graspRibbon(channels: ChannelMap, rig: RigModel): Ribbon {
  const hinge = rig.graspKind === 'hinge';
  return {
    id: 'grasp',
    title: 'grasp opening',
    unit: hinge ? '°' : 'mm',
    scale: hinge ? 180 / Math.PI : 1000,
    decimals: hinge ? 0 : 1,
    low: rig.graspRange.min,
    high: rig.graspRange.max,
    method: 'As recorded.',
    series: (stretch) => channelSeries(stretch, channels.grasp),
  };
}

export function speedRibbon(channels: ChannelMap, rateHz: number): Ribbon {
  const position = channels.pose.slice(0, 3);
  return {
    id: 'speed',
    title: 'hand speed',
    unit: 'm/s',
    scale: 1,
    decimals: 2,
    low: 0,
    high: null,
    method: `From the positions: difference of the means of the ${SPEED_WINDOW_S * 1000} ms before and after; zoomed out, of neighbouring averages, which reads lower than the true peak.`,
    series: derived((stretch) => handSpeed(stretch, position, rateHz)),
  };
}

export function forceRibbon(channels: ChannelMap, rig: RigModel): Ribbon {
  return {
    id: 'force',
    title: 'hand force',
    unit: 'N',
    scale: 1,
    decimals: 1,
    low: 0,
    high: null,
    method: 'From all tensions and the pose: size of the force part of the balance A t + w = 0. Cable friction and inertia are not taken out.',
    series: derived((stretch) => handForce(stretch, channels, rig)),
  };
}

export function standardRibbons(channels: ChannelMap, rateHz: number, rig: RigModel): Ribbon[] {
  return [graspRibbon(channels, rig), speedRibbon(channels, rateHz), forceRibbon(channels, rig)];
}

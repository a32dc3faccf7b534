/** Brings a moment of a source onto the stage: pose, cables, force, trail. Reuses its arrays from frame to frame. */
import type { RigModel } from '@shared/rig/rig-model';
import { forceAt, poseOf } from '../ribbons/hand-force';
import { emptyMoment, type Source } from '../source';
import { stateOf } from '../stave/string-runs';
import type { RigStage, StagedCable } from './rig-stage';
import { TRAIL_POINTS } from './rig-stage';

/** The trail's points are so far apart in time, s: 48 of them are the last 1.4 s. */
const TRAIL_STEP_S = 0.03;

export function createStageDriver(stage: RigStage, source: Source, rig: RigModel): (atS: number) => void {
  const moment = emptyMoment(source.channels);
  const past = emptyMoment(source.channels);
  const wrench = new Float64Array(7);
  const trail = new Float32Array(3 * TRAIL_POINTS);
  const cables: StagedCable[] = [];
  const read = (channel: number) => moment.values[channel] ?? Number.NaN;
  const [x, y, z] = source.channels.pose;

  return (atS) => {
    source.momentAt(atS, moment);
    // In a gap nothing is known: the hand is not shown where it was not measured.
    const pose = moment.known === 'sample' || moment.known === 'average' ? poseOf(read, source.channels) : null;
    source.channels.tensions.forEach((channel, i) => {
      const tension = read(channel);
      cables[i] = { state: stateOf(tension, tension, rig, 'taut'), share: tension / rig.tensionMax };
    });
    stage.setPose(pose, cables);
    const force = pose ? forceAt(read, source.channels, rig, wrench) : Number.NaN;
    // What the device gives the hand: the other side of the balance A t + w = 0.
    stage.setForce(Number.isFinite(force) ? [-(wrench[0] ?? 0), -(wrench[1] ?? 0), -(wrench[2] ?? 0)] : null);
    let count = 0;
    for (let i = 0; i < TRAIL_POINTS && pose; i += 1) {
      source.momentAt(atS - (i + 1) * TRAIL_STEP_S, past);
      const [px, py, pz] = [past.values[x ?? -1], past.values[y ?? -1], past.values[z ?? -1]];
      if (px === undefined || py === undefined || pz === undefined || !Number.isFinite(px + py + pz)) break;
      trail.set([px, py, pz], 3 * count);
      count += 1;
    }
    stage.setTrail(trail, count);
  };
}

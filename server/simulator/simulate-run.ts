/**
 * One run of a simulated rig in virtual time: what a participant's hand does, what the cables carry, what the sensors say.
 *
 * Deterministic: the same options give the same samples on every machine. SI units, base axes, cables numbered from 1.
 */
import type { RigModel } from '@shared/rig';
import { channelNames, type ChannelName, type Chunk } from '@shared/recording';
import { HandWrench } from './hand-wrench';
import { Motion, type Move } from './motion';
import { seededRandom } from './random';
import { Sensors, type Noise } from './readings';
import { Sampling } from './sampling';
import { Statics } from './statics';
import { taskRoom } from './task-room';
import { findTask, taskCodes } from './tasks';
import { effectOf } from './trouble-effects';
import { scheduleTroubles, type Trouble, type TroubleWish } from './trouble';
import { Tremor } from './tremor';
import type { Truth } from './truth';

export type RunOptions = {
  rig: RigModel;
  /** Code of a task: reach, pick-and-place, press, trace. */
  task: string;
  seed: number;
  durationS: number;
  rateHz?: number;
  troubles?: readonly TroubleWish[];
  /** Samples in a chunk; a gap ends one early. */
  chunkSamples?: number;
  noise?: Noise;
  /** Values as they are, without the sensors' decimal grid. */
  exact?: boolean;
  /** Amplitude of the palm's tremor on one axis, m. */
  tremorM?: number;
  /** Time constant of the motors, s; 0: tensions are balanced at every sample. */
  motorLagS?: number;
  /** Lengths as the drums see them: without the cables' stretch. */
  stretch?: boolean;
  /** Adds the wrench on the device as seven further channels. */
  wrench?: boolean;
};

export type Mark = { atS: number; label: string };

/** A run: iterate it for its chunks; marks, moves, troubles and truth are complete when it is over. */
export interface SimulatedRun extends Iterable<Chunk> {
  readonly channels: readonly ChannelName[];
  readonly rateHz: number;
  /** Samples that the rig made, those that were lost included. */
  readonly samples: number;
  readonly troubles: readonly Trouble[];
  readonly marks: readonly Mark[];
  readonly moves: readonly Move[];
  readonly truth: readonly Truth[];
}

/** Hand wrench on the device: force, moment about the palm origin, grasp. */
export const wrenchChannels: readonly ChannelName[] = ['fx_N', 'fy_N', 'fz_N', 'mx_Nm', 'my_Nm', 'mz_Nm', 'fgrasp_N'];

/** @throws RangeError, with a sentence, for a task, a duration, a rate or a trouble that cannot be run on this rig */
export function simulateRun(options: RunOptions): SimulatedRun {
  const task = findTask(options.task);
  if (!task) throw new RangeError(`There is no task “${options.task}”; there are ${taskCodes.join(', ')}.`);
  const { rig, seed, durationS, rateHz = 1000 } = options;
  if (!(durationS > 0 && Number.isFinite(durationS))) throw new RangeError(`A run lasts longer than nothing; ${durationS} s does not.`);
  if (!(rateHz >= 1 && rateHz <= 20_000)) throw new RangeError(`The rate is 1 to 20000 Hz, not ${rateHz}.`);
  const random = seededRandom(seed);
  const room = taskRoom(rig);
  const troubles = scheduleTroubles(options.troubles ?? [], durationS, rig.cableCount, random.branch('troubles'));
  const marks: Mark[] = [];
  const moves: Move[] = [];
  const truth: Truth[] = [];
  const samples = Math.round(durationS * rateHz);

  function* chunks(): Generator<Chunk> {
    marks.length = moves.length = truth.length = 0;
    const statics = new Statics(rig);
    const effects = troubles.map((trouble, i) => effectOf(trouble, statics, random.branch(`trouble ${i}`)));
    const world = new HandWrench(task!.world(room), room.graspArm, 1 / rateHz);
    const motion = new Motion(
      room.home,
      task!.segments(room, random.branch('task')),
      (segment, startS, from) => {
        if (segment.mark !== undefined && startS < durationS) marks.push({ atS: startS, label: segment.mark });
        moves.push({ startS, endS: startS + segment.durationS, from, to: segment.to });
      },
      (segment) => segment.effect && world.happened(segment.effect),
    );
    const tremor = new Tremor(options.tremorM ?? 6e-5, random.branch('tremor'));
    yield* new Sampling(options, rateHz, samples, statics, effects, truth).chunks((tS, hand, wrench) => {
      motion.at(tS, hand);
      tremor.shake(tS, hand);
      for (const effect of effects) effect.hand?.(tS, hand);
      statics.moveTo(hand);
      world.of(hand, wrench);
      for (const effect of effects) effect.wrench?.(tS, statics, wrench);
    }, new Sensors(random.branch('sensors'), options.exact ?? false));
  }

  return {
    channels: channelNames(rig.cableCount, options.wrench ? wrenchChannels : []),
    rateHz, samples, troubles, marks, moves, truth,
    [Symbol.iterator]: chunks,
  };
}

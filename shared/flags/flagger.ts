/** All detectors of a rule set over one recording: the same flags live, offline, and in any chunking. */
import type { ChannelMap } from '../recording/channels';
import type { Chunk } from '../recording/chunk';
import type { RigModel } from '../rig/rig-model';
import type { Detector, DetectorContext } from './detector';
import { byStart, type Flag } from './flag';
import { gapDetector } from './gap';
import { lengthResidual } from './length-residual';
import { oscillationDetector } from './oscillation';
import type { Rules } from './rules';
import { saturationDetector } from './saturation';
import { slackDetector } from './slack';
import { slipDetector } from './slip';

export type Flagger = {
  /** Takes the next chunk; returns the flags that ended in it. */
  step(chunk: Chunk): Flag[];
  /** Flags that are going on and have lasted long enough to count. */
  open(): Flag[];
  /** The recording is over: flags still going on end with its last sample. */
  finish(): Flag[];
};

/**
 * @param rig     the revision that the recording points at
 * @param map     where its channels stand (`parseChannels`)
 * @param rateHz  nominal rate of the recording
 */
export function createFlagger(rig: RigModel, map: ChannelMap, rateHz: number, rules: Rules): Flagger {
  const n = rig.cableCount;
  const runs = [
    ...(rules.slack ? [run(slackDetector(rules.slack, n, rateHz))] : []),
    ...(rules.saturation ? [run(saturationDetector(rules.saturation, n, rateHz))] : []),
    ...(rules.gap ? [run(gapDetector(rules.gap, rateHz))] : []),
    ...(rules.slip ? [run(slipDetector(rules.slip, n, rateHz))] : []),
    ...(rules.oscillation ? [run(oscillationDetector(rules.oscillation, rateHz))] : []),
  ];
  const residual = rules.slip ? lengthResidual(rig, map) : () => [];
  return {
    step(chunk) {
      const context: DetectorContext = { map, rateHz, residualsM: residual(chunk) };
      return runs.flatMap((each) => each.step(chunk, context)).sort(byStart);
    },
    open: () => runs.flatMap((each) => each.open()).sort(byStart),
    finish: () => runs.flatMap((each) => each.finish()).sort(byStart),
  };
}

type Run = { step(chunk: Chunk, context: DetectorContext): readonly Flag[]; open(): readonly Flag[]; finish(): readonly Flag[] };

function run<State>(detector: Detector<State>): Run {
  let state = detector.start();
  return {
    step(chunk, context) {
      const [next, flags] = detector.step(state, chunk, context);
      state = next;
      return flags;
    },
    open: () => detector.open(state),
    finish: () => detector.finish(state),
  };
}

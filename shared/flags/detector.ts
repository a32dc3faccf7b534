/** What every detector shares: its form, and what it is told about the chunk it looks at. */
import type { ChannelMap } from '../recording/channels';
import type { Chunk } from '../recording/chunk';
import type { Flag } from './flag';

export type DetectorContext = {
  readonly map: ChannelMap;
  readonly rateHz: number;
  /** Measured length minus the pose's inverse kinematics, m, one column a cable; NaN where either was not measured. */
  readonly residualsM: readonly Float64Array[];
};

/**
 * A detector of one kind: a pure step over chunks. `step` never changes the state it is given and returns the flags
 * that ended within the chunk; `open` tells those that are going on; `finish` closes them at the recording's end.
 * The flags are the same in any chunking.
 */
export type Detector<State> = {
  start(): State;
  step(state: State, chunk: Chunk, context: DetectorContext): readonly [State, readonly Flag[]];
  open(state: State): readonly Flag[];
  finish(state: State): readonly Flag[];
};

export const secondsOf = (us: number): number => us / 1e6;

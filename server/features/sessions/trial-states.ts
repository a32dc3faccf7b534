/** What may happen to a trial, and what it becomes by it. Everything else is refused. */
import type { TrialState } from '@shared/api/sessions';

interface Move {
  readonly from: readonly TrialState[];
  readonly to: TrialState;
}

export const moves = {
  arm: { from: ['planned'], to: 'armed' },
  disarm: { from: ['armed'], to: 'planned' },
  begin: { from: ['armed'], to: 'recording' },
  loseLink: { from: ['recording'], to: 'away' },
  regainLink: { from: ['away'], to: 'recording' },
  end: { from: ['recording', 'away'], to: 'stopped' },
  /** A recording made elsewhere, put into the book afterwards. */
  file: { from: ['planned'], to: 'stopped' },
  judge: { from: ['stopped', 'judged'], to: 'judged' },
} as const satisfies Record<string, Move>;

export type MoveName = keyof typeof moves;

/** In the hands of a device. */
export const runningStates: readonly TrialState[] = ['armed', 'recording', 'away'];
/** Holds a recording that is whole. */
export const recordedStates: readonly TrialState[] = ['stopped', 'judged'];

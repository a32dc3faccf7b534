import { NumericError } from '../rig/numeric-error';
import { requirePairs } from '../stats/require-sample';
import { requireRate } from './derivative';

export interface GraspRule {
  /** Travel of the grasp [m or rad], from the rig. */
  readonly min: number;
  readonly max: number;
  /** Share of the travel that makes an opening or a closing; smaller changes are play. */
  readonly turnShare: number;
  /** Share of the travel within which a held object keeps the grasp. */
  readonly steadyShare: number;
  /** How long the grasp stays steady after closing before it counts as a hold [s]. */
  readonly holdS: number;
  /** A hold that opens while the hand moves at least this fast is a drop, not a placing [m/s]. */
  readonly dropSpeedMps: number;
}

/** Common practice for the shares, times and speeds; the travel is the rig's own. */
export function graspRule(min: number, max: number): GraspRule {
  if (!(max > min)) throw new NumericError('BAD_REQUEST', 'The grasp must travel from a smaller to a larger value.');
  return { min, max, turnShare: 0.2, steadyShare: 0.05, holdS: 0.3, dropSpeedMps: 0.1 };
}

export interface GraspCounts {
  readonly openings: number;
  readonly closings: number;
  /** Closings that ended steady before the jaws met: something was between them. */
  readonly holds: number;
  /** Holds that opened while the hand was moving. */
  readonly drops: number;
  /** Time in holds [s]. */
  readonly holdS: number;
}

/** Follows the grasp as samples come; the same for any chunking. */
export interface GraspFollower {
  /** @param grasp m or rad @param speedMps of the hand, smoothed below tremor */
  push(grasp: number, speedMps: number): void;
  /** What follows does not continue what was: an unfinished turn is forgotten. */
  endStretch(): void;
  readonly counts: GraspCounts;
}

/**
 * Openings, closings, holds and drops from the grasp alone, by turning points that stand out.
 *
 * Whether something was held is inferred: the jaws stopped before they met. Where grip force is known, trust that first.
 *
 * @param fs sampling rate [Hz]
 * @throws NumericError BAD_REQUEST for a rate that is not positive
 */
export function graspFollower(rule: GraspRule, fs: number): GraspFollower {
  requireRate(fs);
  const travel = rule.max - rule.min;
  const turn = rule.turnShare * travel;
  const band = rule.steadyShare * travel;
  const holdSamples = Math.max(1, Math.round(rule.holdS * fs));
  let openings = 0;
  let closings = 0;
  let holds = 0;
  let drops = 0;
  let heldSamples = 0;
  let low = Infinity;
  let high = -Infinity;
  let state: 'unknown' | 'opened' | 'closing' | 'held' = 'unknown';
  let steadyAt = 0;
  let steadyFor = 0;
  let held = false;

  const rest = (grasp: number): void => {
    if (Math.abs(grasp - steadyAt) <= band) steadyFor += 1;
    else {
      steadyAt = grasp;
      steadyFor = 1;
    }
    // Jaws that met on each other hold nothing.
    if (steadyFor >= holdSamples && grasp > rule.min + band) {
      state = 'held';
      held = true;
      holds += 1;
      heldSamples += steadyFor;
    }
  };

  return {
    push(grasp, speed) {
      low = Math.min(low, grasp);
      high = Math.max(high, grasp);
      if (state !== 'opened' && grasp - low >= turn) {
        openings += 1;
        if (held && speed >= rule.dropSpeedMps) drops += 1;
        held = false;
        state = 'opened';
        high = grasp;
      } else if ((state === 'unknown' || state === 'opened') && high - grasp >= turn) {
        closings += 1;
        state = 'closing';
        low = grasp;
        steadyAt = grasp;
        steadyFor = 0;
      } else if (state === 'closing') rest(grasp);
      else if (state === 'held' && Math.abs(grasp - steadyAt) <= band) heldSamples += 1;
    },
    endStretch() {
      state = 'unknown';
      held = false;
      low = Infinity;
      high = -Infinity;
    },
    get counts() {
      return { openings, closings, holds, drops, holdS: heldSamples / fs };
    },
  };
}

/**
 * Openings, closings, holds and drops of a whole recording.
 *
 * @param grasp m or rad
 * @param speed of the hand at the same samples, smoothed below tremor [m/s]
 * @param fs    sampling rate [Hz]
 * @throws NumericError BAD_REQUEST for lists of different length, TOO_SHORT without samples
 */
export function graspPhases(grasp: ArrayLike<number>, speed: ArrayLike<number>, fs: number, rule: GraspRule): GraspCounts {
  requirePairs(grasp, speed, 1, ['grasp', 'speed']);
  const follower = graspFollower(rule, fs);
  for (let i = 0; i < grasp.length; i++) follower.push(grasp[i] as number, speed[i] as number);
  return follower.counts;
}

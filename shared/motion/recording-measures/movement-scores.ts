import { NumericError } from '../../rig/numeric-error';
import { logDimensionlessJerk } from '../log-dimensionless-jerk';
import { sparc } from '../sparc';

/** Common practice: the hand has set off above the first speed and arrived below the second [m/s], both without tremor. */
const SETS_OFF_MPS = 0.03;
const ARRIVES_MPS = 0.02;
const LEAST_S = 0.2;
/** A movement that never rests for so long is tracking, not reaching; it is not scored, and memory stays bounded. */
const LONGEST_S = 60;

export interface MovementScores {
  /** Movements seen from rest to rest. */
  readonly movements: number;
  /** Mean over them; null when there was none. */
  readonly sparc: number | null;
  readonly ldlj: number | null;
  /** Movements left out: cut by a gap or an end, longer than a minute, or without a defined score. */
  readonly leftOut: number;
}

/** Cuts a speed profile into movements from rest to rest and scores the smoothness of each. */
export interface MovementScorer {
  /** @param fineMps with tremor: what is scored @param coarseMps without: what tells rest from movement */
  push(fineMps: number, coarseMps: number): void;
  endStretch(): void;
  readonly scores: MovementScores;
}

/**
 * Smoothness of a recording as the mean over its single movements: SPARC and LDLJ are defined for one movement, not for an hour.
 *
 * @param rateHz of the speeds
 */
export function movementScorer(rateHz: number): MovementScorer {
  const speeds = new Float64Array(Math.ceil(LONGEST_S * rateHz));
  let length = 0;
  let state: 'unknown' | 'resting' | 'moving' | 'ignored' = 'unknown';
  let movements = 0;
  let leftOut = 0;
  let sparcSum = 0;
  let ldljSum = 0;

  const score = (): void => {
    if (length < LEAST_S * rateHz) return;
    const movement = speeds.subarray(0, length);
    try {
      const smoothness = sparc(movement, rateHz);
      const jerk = logDimensionlessJerk(movement, rateHz);
      movements += 1;
      sparcSum += smoothness;
      ldljSum += jerk;
    } catch (error) {
      if (!(error instanceof NumericError)) throw error;
      leftOut += 1;
    }
  };

  return {
    push(fine, coarse) {
      if (state === 'moving') {
        if (coarse < ARRIVES_MPS) {
          score();
          state = 'resting';
        } else if (length === speeds.length) {
          leftOut += 1;
          state = 'ignored';
        } else speeds[length++] = fine;
      } else if (coarse < ARRIVES_MPS) state = 'resting';
      else if (state === 'unknown') {
        // Already moving when the stretch begins: the start was not seen.
        leftOut += 1;
        state = 'ignored';
      } else if (state === 'resting' && coarse >= SETS_OFF_MPS) {
        state = 'moving';
        length = 0;
        speeds[length++] = fine;
      }
    },
    endStretch() {
      if (state === 'moving') leftOut += 1;
      state = 'unknown';
      length = 0;
    },
    get scores() {
      return {
        movements,
        sparc: movements > 0 ? sparcSum / movements : null,
        ldlj: movements > 0 ? ldljSum / movements : null,
        leftOut,
      };
    },
  };
}

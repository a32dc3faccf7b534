import { NumericError } from '../../rig/numeric-error';
import { logDimensionlessJerk } from '../log-dimensionless-jerk';
import { sparc } from '../sparc';

/** Common practice: the hand has set off above the first speed and arrived below the second [m/s], both without tremor. */
const SETS_OFF_MPS = 0.03;
const ARRIVES_MPS = 0.02;
const LEAST_S = 0.2;
/** A movement reaches out to the valleys of speed beside it, at most this far beyond those two thresholds. */
const FOOT_S = 0.3;
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
  const longest = Math.ceil(LONGEST_S * rateHz);
  const foot = Math.ceil(FOOT_S * rateHz);
  const speeds = new Float64Array(longest + 2 * foot);
  /** Samples gathered so far; while resting, only those since speed last fell. */
  let length = 0;
  let settlingFor = 0;
  let previous = Infinity;
  let state: 'unknown' | 'resting' | 'moving' | 'settling' | 'ignored' = 'unknown';
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

  const rest = (fine: number, coarse: number): void => {
    if (coarse <= previous) length = 0;
    if (length === foot) speeds.copyWithin(0, 1, length--);
    speeds[length++] = fine;
  };

  return {
    push(fine, coarse) {
      if (state === 'settling' && (coarse >= previous || settlingFor === foot)) {
        score();
        state = 'resting';
        length = 0;
      }
      if (state === 'unknown') {
        // Already moving when the stretch begins: the start was not seen.
        if (coarse >= ARRIVES_MPS) leftOut += 1;
        state = coarse < ARRIVES_MPS ? 'resting' : 'ignored';
      }
      if (state === 'ignored' && coarse < ARRIVES_MPS) state = 'resting';
      if (state === 'resting') {
        rest(fine, coarse);
        if (coarse >= SETS_OFF_MPS) state = 'moving';
      } else if (state === 'moving' || state === 'settling') {
        speeds[length++] = fine;
        if (state === 'settling') settlingFor += 1;
        else if (coarse < ARRIVES_MPS) {
          state = 'settling';
          settlingFor = 0;
        } else if (length > longest) {
          leftOut += 1;
          state = 'ignored';
          length = 0;
        }
      }
      previous = coarse;
    },
    endStretch() {
      if (state === 'moving') leftOut += 1;
      if (state === 'settling') score();
      state = 'unknown';
      length = 0;
      previous = Infinity;
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

import { requireSample } from '../stats/require-sample';

export interface MovementUnitRule {
  /** A unit's peak stands at least this far above the valleys beside it [m/s]. Common practice: 0.02. */
  readonly leastRiseMps: number;
  /** And at least by this share of the peak. Common practice: 0.2. */
  readonly leastShare: number;
}

export const MOVEMENT_UNIT_RULE: MovementUnitRule = { leastRiseMps: 0.02, leastShare: 0.2 };

/** Counts accelerate-and-brake units as speed comes in; a pure state machine, the same for any chunking. */
export interface MovementUnitCounter {
  push(speedMps: number): void;
  /** Ends a stretch (a gap, the end): what rises still counts when it has risen far enough. */
  endStretch(): void;
  readonly count: number;
}

/**
 * Counter of movement units: one acceleration and braking of the hand. A direct reach is one unit, a hesitant one several.
 *
 * @param rule how far a peak must stand out
 * @source von Hofsten 1979 (movement units); how far a peak must stand out is common practice
 */
export function movementUnitCounter(rule: MovementUnitRule = MOVEMENT_UNIT_RULE): MovementUnitCounter {
  let climbing = false;
  let valley = Infinity;
  let peak = 0;
  let count = 0;
  const standsOut = (top: number, bottom: number): boolean =>
    top - bottom >= rule.leastRiseMps && top - bottom >= rule.leastShare * top;
  return {
    push(speed) {
      if (climbing) {
        peak = Math.max(peak, speed);
        if (standsOut(peak, speed)) {
          count += 1;
          climbing = false;
          valley = speed;
        }
        return;
      }
      valley = Math.min(valley, speed);
      if (standsOut(speed, valley)) {
        climbing = true;
        peak = speed;
      }
    },
    endStretch() {
      if (climbing) count += 1;
      climbing = false;
      valley = Infinity;
    },
    get count() {
      return count;
    },
  };
}

/**
 * Number of movement units in a speed profile.
 *
 * @param speed m/s, smoothed below tremor (about 5 Hz)
 * @throws NumericError TOO_SHORT for an empty profile
 */
export function movementUnits(speed: ArrayLike<number>, rule: MovementUnitRule = MOVEMENT_UNIT_RULE): number {
  requireSample(speed, 1, 'speed');
  const counter = movementUnitCounter(rule);
  for (let i = 0; i < speed.length; i++) counter.push(speed[i] as number);
  counter.endStretch();
  return counter.count;
}

import { graspFollower, graspRule } from '../grasp-phases';
import { movementUnitCounter } from '../movement-units';
import { pauseTimer } from '../pauses';
import { movementScorer } from './movement-scores';
import { pathSmoother } from './path-smoother';
import { tremorMeter } from './tremor-meter';

/** Rate at which movement is looked at [Hz]; faster recordings are averaged down to it. */
const MOVEMENT_HZ = 100;

export interface MovementMeasures {
  /** Time of unbroken stretches over which movement was measured [s]. */
  readonly movementMeasuredS: number;
  readonly pathLengthM: number | null;
  readonly peakSpeedMps: number | null;
  readonly meanSpeedMps: number | null;
  /** Size of the box that holds the path, along the base axes. */
  readonly extentXM: number | null;
  readonly extentYM: number | null;
  readonly extentZM: number | null;
  /** Movements from rest to rest, and the mean of their smoothness. */
  readonly movements: number | null;
  readonly sparc: number | null;
  readonly ldlj: number | null;
  readonly movementUnits: number | null;
  readonly pauses: number | null;
  readonly pauseS: number | null;
  /** 8 to 12 Hz, all directions together. */
  readonly tremorRmsM: number | null;
  readonly graspOpenings: number | null;
  /** Closings that ended steady before the jaws met. */
  readonly graspHolds: number | null;
  readonly graspHoldS: number | null;
  /** Holds that opened while the hand was moving. */
  readonly graspDrops: number | null;
}

export interface MovementAccumulator {
  /** @param x, y, z palm origin in base [m] @param grasp m or rad; NaN is "not measured" */
  push(x: number, y: number, z: number, grasp: number): void;
  /** What follows does not continue what was. */
  breakOff(): void;
  finish(): MovementMeasures;
}

/**
 * What the hand did, sample by sample, in constant memory. A missing position breaks the movement like a gap does.
 *
 * @param rateHz sampling rate of what is pushed
 * @param travel of the grasp; without it openings, holds and drops are not counted
 */
export function movementMeasures(
  rateHz: number,
  travel: { readonly min: number; readonly max: number } | undefined,
): MovementAccumulator {
  const blockOf = Math.max(1, Math.round(rateHz / MOVEMENT_HZ));
  const rate = rateHz / blockOf;
  const block = new Float64Array(4);
  let inBlock = 0;
  let inStretch = false;

  const units = movementUnitCounter();
  const rests = pauseTimer(rate);
  const scorer = movementScorer(rate);
  const tremor = tremorMeter(rate, blockOf);
  const grip = travel === undefined ? null : graspFollower(graspRule(travel.min, travel.max), rate);
  const low = new Float64Array(3).fill(Infinity);
  const high = new Float64Array(3).fill(-Infinity);
  let graspSamples = 0;
  let length = 0;
  let pieces = 0;
  let peakSpeed = 0;

  // Fine and coarse positions of the last two smoothed samples: speed is their central difference.
  const before = new Float64Array(6);
  const middle = new Float64Array(6);
  let middleGrasp = Number.NaN;
  let smoothed = 0;

  const smoother = pathSmoother(rate, (fineX, fineY, fineZ, coarseX, coarseY, coarseZ, grasp) => {
    if (smoothed > 0) {
      length += Math.hypot(fineX - at(middle, 0), fineY - at(middle, 1), fineZ - at(middle, 2));
      pieces += 1;
    }
    if (smoothed > 1) {
      const fine = (Math.hypot(fineX - at(before, 0), fineY - at(before, 1), fineZ - at(before, 2)) * rate) / 2;
      const coarse = (Math.hypot(coarseX - at(before, 3), coarseY - at(before, 4), coarseZ - at(before, 5)) * rate) / 2;
      if (fine > peakSpeed) peakSpeed = fine;
      units.push(coarse);
      rests.push(coarse);
      scorer.push(fine, coarse);
      if (Number.isNaN(middleGrasp)) grip?.endStretch();
      else {
        graspSamples += 1;
        grip?.push(middleGrasp, coarse);
      }
    }
    widen(low, high, fineX, fineY, fineZ);
    before.set(middle);
    middle[0] = fineX;
    middle[1] = fineY;
    middle[2] = fineZ;
    middle[3] = coarseX;
    middle[4] = coarseY;
    middle[5] = coarseZ;
    middleGrasp = grasp;
    smoothed += 1;
  });

  const breakOff = (): void => {
    if (!inStretch) return;
    inStretch = false;
    inBlock = 0;
    block.fill(0);
    smoother.endStretch();
    smoothed = 0;
    units.endStretch();
    rests.endStretch();
    scorer.endStretch();
    tremor?.endStretch();
    grip?.endStretch();
  };

  return {
    push(x, y, z, grasp) {
      if (Number.isNaN(x) || Number.isNaN(y) || Number.isNaN(z)) {
        breakOff();
        return;
      }
      inStretch = true;
      block[0] = at(block, 0) + x;
      block[1] = at(block, 1) + y;
      block[2] = at(block, 2) + z;
      block[3] = at(block, 3) + grasp;
      inBlock += 1;
      if (inBlock < blockOf) return;
      const meanX = at(block, 0) / blockOf;
      const meanY = at(block, 1) / blockOf;
      const meanZ = at(block, 2) / blockOf;
      smoother.push(meanX, meanY, meanZ, at(block, 3) / blockOf);
      tremor?.push(meanX, meanY, meanZ);
      block.fill(0);
      inBlock = 0;
    },
    breakOff,
    finish() {
      breakOff();
      const moved = <T>(value: T): T | null => (pieces > 0 ? value : null);
      const { movements, sparc, ldlj } = scorer.scores;
      const counts = grip !== null && graspSamples > 0 ? grip.counts : null;
      return {
        movementMeasuredS: pieces / rate,
        pathLengthM: moved(length),
        peakSpeedMps: moved(peakSpeed),
        meanSpeedMps: pieces > 0 ? (length * rate) / pieces : null,
        extentXM: moved(at(high, 0) - at(low, 0)),
        extentYM: moved(at(high, 1) - at(low, 1)),
        extentZM: moved(at(high, 2) - at(low, 2)),
        movements: moved(movements),
        sparc,
        ldlj,
        movementUnits: moved(units.count),
        pauses: moved(rests.count),
        pauseS: moved(rests.totalS),
        tremorRmsM: tremor?.rmsM ?? null,
        graspOpenings: counts?.openings ?? null,
        graspHolds: counts?.holds ?? null,
        graspHoldS: counts?.holdS ?? null,
        graspDrops: counts?.drops ?? null,
      };
    },
  };
}

function at(values: Float64Array, index: number): number {
  return values[index] as number;
}

function widen(low: Float64Array, high: Float64Array, x: number, y: number, z: number): void {
  if (x < at(low, 0)) low[0] = x;
  if (y < at(low, 1)) low[1] = y;
  if (z < at(low, 2)) low[2] = z;
  if (x > at(high, 0)) high[0] = x;
  if (y > at(high, 1)) high[1] = y;
  if (z > at(high, 2)) high[2] = z;
}

import { quantile } from '../../stats/quantile';
import { NumericError } from '../numeric-error';
import type { Quat, Vec3 } from '../pose';
import { geodesicAngle } from '../rotation/geodesic-angle';

/** Sizes of the errors of a run of samples, in the unit of the quantity. */
export type ErrorSummary = { mean: number; rms: number; max: number; p95: number };

export type TrackingError = {
  /** m: distances. */
  position: ErrorSummary;
  /** rad: geodesic angles in [0, pi], whatever the signs of the quaternions. Absent when no orientations were given. */
  rotation?: ErrorSummary;
  /** m or rad: sizes of the difference. Absent when no grasps were given. */
  grasp?: ErrorSummary;
};

/** One list of samples per quantity; what stands at the same place belongs to the same moment and is in the same frame. */
export type TrackedPoses = { p: readonly Readonly<Vec3>[]; q?: readonly Readonly<Quat>[]; grasp?: readonly number[] };

export type TrackingTolerances = { /** m */ position: number; /** rad */ rotation: number };

/**
 * What a good rig on a frame about 0.7 m wide keeps to against an external tracker: 2 mm and 1.45 degrees.
 * Common practice, without a source.
 */
export const DEFAULT_TRACKING_TOLERANCES: Readonly<TrackingTolerances> = { position: 0.002, rotation: (1.45 * Math.PI) / 180 };

/**
 * Error of poses against an external tracker, sample by sample: position, orientation, grasp.
 *
 * Bring both into one frame (`registerPoints`, `registerOrientations`) and one time (`timeOffset`) first.
 *
 * @throws NumericError TOO_SHORT without samples, BAD_REQUEST for unequal numbers or values that are not finite
 * @source Euclidean and geodesic distance (Huynh 2009); p95 interpolated between neighbours of the sorted list
 */
export function trackingError(reference: TrackedPoses, measured: TrackedPoses): TrackingError {
  const position = summary(paired('positions', reference.p, measured.p, (a, b) => Math.hypot(a[0] - b[0], a[1] - b[1], a[2] - b[2])));
  const out: TrackingError = { position };
  if (reference.q !== undefined || measured.q !== undefined) {
    out.rotation = summary(paired('orientations', reference.q ?? [], measured.q ?? [], geodesicAngle));
  }
  if (reference.grasp !== undefined || measured.grasp !== undefined) {
    out.grasp = summary(paired('grasps', reference.grasp ?? [], measured.grasp ?? [], (a, b) => Math.abs(a - b)));
  }
  return out;
}

/** Which quantities stay within the tolerances in 95 of 100 samples; a quantity that was not measured is left out. */
export function withinTolerances(error: TrackingError, tolerances: TrackingTolerances = DEFAULT_TRACKING_TOLERANCES): { position: boolean; rotation?: boolean } {
  const position = error.position.p95 <= tolerances.position;
  return error.rotation === undefined ? { position } : { position, rotation: error.rotation.p95 <= tolerances.rotation };
}

function paired<T>(what: string, reference: readonly T[], measured: readonly T[], error: (a: T, b: T) => number): number[] {
  if (reference.length !== measured.length) {
    throw new NumericError('BAD_REQUEST', `There are ${reference.length} ${what} on one side and ${measured.length} on the other; each needs its partner.`);
  }
  if (reference.length === 0) throw new NumericError('TOO_SHORT', `There are no ${what} to compare.`);
  return reference.map((value, i) => {
    const size = error(value, measured[i]!);
    if (Number.isFinite(size)) return size;
    throw new NumericError('BAD_REQUEST', `Number ${i + 1} of the ${what} is not finite; leave missing samples out first.`);
  });
}

function summary(errors: readonly number[]): ErrorSummary {
  const n = errors.length;
  const sorted = Float64Array.from(errors).sort();
  const mean = errors.reduce((sum, error) => sum + error / n, 0);
  const rms = Math.sqrt(errors.reduce((sum, error) => sum + (error * error) / n, 0));
  return { mean, rms, max: sorted[n - 1]!, p95: quantile(sorted, 0.95) };
}

import { NumericError } from '../rig/numeric-error';
import { meanAndDeviation } from '../stats/mean-and-deviation';
import { requireSample } from '../stats/require-sample';

/** Width of a normal spread that holds 96 % of the selections, in deviations. */
const EFFECTIVE_WIDTHS = 4.133;

export interface PointingTrials {
  /** Distance from start to target [m]. */
  readonly D: number;
  /** Width of the target along the movement [m]. */
  readonly W: number;
  /** Nominal start and target; they give the axis of the task. */
  readonly from: readonly number[];
  readonly target: readonly number[];
  /** Where each movement began and where it selected [m]. */
  readonly starts: readonly (readonly number[])[];
  readonly selections: readonly (readonly number[])[];
  /** s */
  readonly movementTimes: readonly number[];
}

export interface PointingThroughput {
  /** s */
  readonly meanMT: number;
  /** bit */
  readonly idNominal: number;
  /** bit/s */
  readonly throughputNominal: number;
  /** m */
  readonly sdAlongAxis: number;
  readonly effectiveWidth: number;
  readonly effectiveDistance: number;
  /** bit */
  readonly idEffective: number;
  /** bit/s */
  readonly throughputEffective: number;
}

/**
 * Throughput of a series of pointing movements of one distance and width, nominal and adjusted for accuracy.
 *
 * Selections are projected on the axis from start to target; effective width is 4.133 deviations of where they fell, effective
 * distance the mean way along the axis, difficulty log2(D/W + 1), throughput difficulty over mean time.
 *
 * @throws NumericError TOO_SHORT below two movements, BAD_REQUEST for lists that do not match, sizes or times that are not
 *   positive, UNDEFINED when all selections fell on one spot or did not go towards the target
 * @source ISO 9241-411:2012; Soukoreff and MacKenzie 2004
 */
export function pointingThroughput(trials: PointingTrials): PointingThroughput {
  const { D, W, movementTimes, selections, starts } = trials;
  if (!(D > 0 && W > 0 && Number.isFinite(D / W))) throw new NumericError('BAD_REQUEST', 'Distance and width must be positive.');
  if (selections.length !== starts.length || selections.length !== movementTimes.length) {
    throw new NumericError('BAD_REQUEST', 'Starts, selections and movement times must be as many as each other.');
  }
  requireSample(movementTimes, 2, 'movementTimes');
  if (movementTimes.some((time) => time <= 0)) throw new NumericError('BAD_REQUEST', 'Every movement takes longer than 0 s.');
  const along = axisProjection(trials);
  const target = along(trials.target, trials.from);
  const misses = meanAndDeviation(selections.map((selection) => along(selection, trials.target)));
  // Rounding of the coordinates, not aim: below it the spread cannot be told from none.
  if (misses.sd <= 8 * Number.EPSILON * Math.max(target, D)) {
    throw new NumericError('UNDEFINED', 'Every selection fell on the same spot, so the effective width is zero.');
  }
  const effectiveWidth = EFFECTIVE_WIDTHS * misses.sd;
  const effectiveDistance = meanAndDeviation(selections.map((selection, i) => along(selection, starts[i] as number[]))).mean;
  if (effectiveDistance <= 0) throw new NumericError('UNDEFINED', 'On average the movements did not go towards the target.');
  const meanMT = meanAndDeviation(movementTimes).mean;
  const idNominal = Math.log2(D / W + 1);
  const idEffective = Math.log2(effectiveDistance / effectiveWidth + 1);
  return {
    meanMT,
    idNominal,
    throughputNominal: idNominal / meanMT,
    sdAlongAxis: misses.sd,
    effectiveWidth,
    effectiveDistance,
    idEffective,
    throughputEffective: idEffective / meanMT,
  };
}

function axisProjection({ from, target, starts, selections }: PointingTrials): (point: readonly number[], origin: readonly number[]) => number {
  const dimension = from.length;
  for (const point of [from, target, ...starts, ...selections]) {
    requireSample(point, 1, 'A point');
    if (point.length !== dimension) throw new NumericError('BAD_REQUEST', 'All points must have the same number of coordinates.');
  }
  const way = target.map((value, i) => value - (from[i] as number));
  const length = Math.hypot(...way);
  if (length === 0) throw new NumericError('UNDEFINED', 'Start and target are the same point, so the task has no axis.');
  return (point, origin) => way.reduce((sum, part, i) => sum + (part / length) * ((point[i] as number) - (origin[i] as number)), 0);
}

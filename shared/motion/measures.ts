/**
 * Everything that is measured over a whole recording, in one pass and constant memory. SI units; every key ends in its unit.
 */
import { NumericError } from '../rig/numeric-error';
import { forceMeasures, type ForceMeasures } from './recording-measures/force-measures';
import { movementMeasures, type MovementMeasures } from './recording-measures/movement-measures';
import { tensionTimes, type CableMeasures, type TensionLimits } from './recording-measures/tension-times';

/** A step of time longer than this many periods is a gap. */
const GAP_PERIODS = 1.5;

export interface MeasureOptions extends TensionLimits {
  /** Sampling rate of the recording [Hz]. */
  readonly rateHz: number;
  /** Travel of the grasp [m or rad]; without it openings, holds and drops are not counted. */
  readonly grasp?: { readonly min: number; readonly max: number } | undefined;
}

/** Columns of one piece of a recording; NaN is "not measured". */
export interface MeasureChunk {
  readonly count: number;
  /** s, strictly rising over all chunks. */
  readonly t: ArrayLike<number>;
  /** Palm origin in base [m]. */
  readonly x: ArrayLike<number>;
  readonly y: ArrayLike<number>;
  readonly z: ArrayLike<number>;
  /** Palm in base, unit quaternion: needed for the work of `wrench` only. */
  readonly q?: readonly [ArrayLike<number>, ArrayLike<number>, ArrayLike<number>, ArrayLike<number>] | undefined;
  /** m or rad. */
  readonly grasp: ArrayLike<number>;
  /** N, one column a cable. */
  readonly tensions: readonly ArrayLike<number>[];
  /** Wrench of the hand on the device, seven columns: force [N], moment [N m], grasp force. */
  readonly wrench?: readonly ArrayLike<number>[] | undefined;
  /** 1 where tensions within the limits balance the wrench, 0 where none do. */
  readonly feasible?: ArrayLike<number> | undefined;
}

interface ReachMeasures {
  /** Time in which no tensions within the controller's limits balance the hand's wrench. */
  readonly unreachableS: number | null;
  /** The same as a share of the time in which it could be told, 0 to 1. */
  readonly unreachableShare: number | null;
}

interface TensionMeasures {
  /** Time with at least one cable in the state. */
  readonly slackS: number | null;
  readonly nearLimitS: number | null;
  readonly saturatedS: number | null;
  /** The same as shares of the time in which tensions were measured, 0 to 1. */
  readonly slackShare: number | null;
  readonly nearLimitShare: number | null;
  readonly saturatedShare: number | null;
  readonly meanTensionN: number | null;
  readonly peakTensionN: number | null;
  readonly cables: readonly CableMeasures[];
}

interface Measures extends MovementMeasures, TensionMeasures, ReachMeasures, ForceMeasures {
  /** From the first to the last sample. */
  readonly durationS: number | null;
}

/** Results over a recording. Null means "could not be measured"; `notMeasured` says why. */
export interface RecordingMeasures extends Measures {
  readonly notMeasured: readonly { readonly measure: keyof Measures | `cables.${number}`; readonly reason: string }[];
}

export interface MeasureAccumulator {
  push(chunk: MeasureChunk): void;
  /** Ends the recording and gives its measures. Nothing may be pushed afterwards. */
  finish(): RecordingMeasures;
}

/**
 * Measures of a whole recording, chunk by chunk; how it was cut into chunks changes nothing.
 *
 * A gap (a step above 1.5 periods) or a missing position breaks the movement: nothing is bridged, what lies on both sides is
 * measured apart. Positions are averaged to about 100 Hz, then smoothed without phase to 20 Hz (what is measured) and 5 Hz
 * (what tells movement from rest).
 *
 * @throws NumericError BAD_REQUEST for a rate that is not positive or a grasp without travel
 */
export function createMeasures(options: MeasureOptions): MeasureAccumulator {
  const { rateHz } = options;
  if (!(rateHz > 0 && Number.isFinite(rateHz))) throw new NumericError('BAD_REQUEST', 'The rate must be a positive number of hertz.');
  const period = 1 / rateHz;
  const tensions = tensionTimes(options);
  const movement = movementMeasures(rateHz, options.grasp);
  const force = forceMeasures();
  let firstS = Number.NaN;
  let lastS = Number.NaN;
  // A sample's tensions stand until the next sample; at the end of a chunk the row is copied, so that no chunk is kept.
  let standing: readonly ArrayLike<number>[] | null = null;
  let standingIndex = 0;
  let standingFeasible = Number.NaN;
  const reach = { toldS: 0, unreachableS: 0 };
  const addReach = (seconds: number): void => {
    if (Number.isNaN(standingFeasible)) return;
    reach.toldS += seconds;
    if (standingFeasible === 0) reach.unreachableS += seconds;
  };
  const copied = Array.from({ length: options.cableCount }, () => new Float64Array(1));
  let finished = false;

  return {
    push(chunk) {
      if (finished) throw new NumericError('BAD_REQUEST', 'The measures of this recording are finished; start new ones.');
      for (let i = 0; i < chunk.count; i++) {
        const t = chunk.t[i] as number;
        const step = t - lastS;
        const gap = step > GAP_PERIODS * period;
        if (standing !== null) {
          tensions.push(standing, standingIndex, gap ? period : step);
          addReach(gap ? period : step);
        }
        standingFeasible = chunk.feasible?.[i] ?? Number.NaN;
        if (gap) {
          movement.breakOff();
          force.breakOff();
        }
        if (Number.isNaN(firstS)) firstS = t;
        lastS = t;
        standing = chunk.tensions;
        standingIndex = i;
        movement.push(chunk.x[i] as number, chunk.y[i] as number, chunk.z[i] as number, chunk.grasp[i] as number);
        force.push(chunk, i);
      }
      if (chunk.count > 0) {
        copied.forEach((column, cable) => (column[0] = chunk.tensions[cable]?.[chunk.count - 1] ?? Number.NaN));
        standing = copied;
        standingIndex = 0;
      }
    },
    finish() {
      finished = true;
      if (standing !== null) {
        tensions.push(standing, standingIndex, period);
        addReach(period);
      }
      const empty = Number.isNaN(firstS);
      const measures: Measures = {
        durationS: empty ? null : lastS - firstS,
        ...movement.finish(),
        ...tensionMeasures(tensions.finish()),
        unreachableS: reach.toldS > 0 ? reach.unreachableS : null,
        unreachableShare: reach.toldS > 0 ? reach.unreachableS / reach.toldS : null,
        ...force.finish(),
      };
      return { ...measures, notMeasured: reasons(measures, empty, options) };
    },
  };
}

function tensionMeasures(held: ReturnType<ReturnType<typeof tensionTimes>['finish']>): TensionMeasures {
  const { measuredS, slackS, nearLimitS, saturatedS, meanTensionN, peakTensionN, cables } = held;
  const known = (value: number): number | null => (measuredS > 0 ? value : null);
  return {
    slackS: known(slackS),
    nearLimitS: known(nearLimitS),
    saturatedS: known(saturatedS),
    slackShare: known(slackS / measuredS),
    nearLimitShare: known(nearLimitS / measuredS),
    saturatedShare: known(saturatedS / measuredS),
    meanTensionN,
    peakTensionN,
    cables,
  };
}

function reasons(measures: Measures, empty: boolean, options: MeasureOptions): RecordingMeasures['notMeasured'] {
  const none = 'The recording holds no samples.';
  const ofAll = (Object.keys(measures) as (keyof Measures)[])
    .filter((measure) => measures[measure] === null)
    .map((measure) => ({ measure, reason: empty ? none : reasonFor(measure, measures, options) }));
  const ofCables = measures.cables
    .filter(({ peakTensionN }) => peakTensionN === null)
    .map(({ cable }) => ({ measure: `cables.${cable}` as const, reason: empty ? none : `The tension of cable ${cable} was not measured.` }));
  return [...ofAll, ...ofCables];
}

function reasonFor(measure: keyof Measures, measures: Measures, options: MeasureOptions): string {
  if (measure.startsWith('grasp')) {
    return options.grasp === undefined
      ? 'The travel of the grasp is not known.'
      : 'The grasp was not measured along with the position for long enough.';
  }
  if (measure === 'tremorRmsM' && options.rateHz < 30) return 'The sampling rate is too low for the tremor band.';
  if (measure === 'tremorRmsM') return 'No stretch without a gap lasted 2.56 s.';
  if ((measure === 'sparc' || measure === 'ldlj') && measures.pathLengthM !== null) {
    return 'No movement was seen from rest to rest.';
  }
  if (measure.endsWith('ForceN') || measure === 'workJ' || measure === 'leastEnergyJ') {
    return 'The recording carries no wrench of the hand.';
  }
  if (measure.startsWith('unreachable')) return 'Pose and tensions were never measured together.';
  if (/slack|Limit|saturated|Tension/.test(measure)) return 'No cable tension was measured.';
  return 'No stretch without a gap lasted long enough to smooth the position.';
}

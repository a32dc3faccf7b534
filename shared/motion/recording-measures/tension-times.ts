import { rainflowCounter } from '../rainflow';

export interface TensionLimits {
  readonly cableCount: number;
  /** N; what the controller keeps. */
  readonly tensionMin: number;
  /** N; what the motor gives at most. */
  readonly tensionMax: number;
  /** N; below, a cable counts as slack. */
  readonly slackBelow: number;
}

/** A cable is saturated from this far below its limit [N]: the sensor's last step. */
const SATURATED_WITHIN_N = 0.05;
/** Share of the limit from which a cable is near it. Common practice. */
const NEAR_SHARE = 0.9;
/** Reversals of tension below this are sensor noise [N]. */
const LEAST_CYCLE_N = 1;

/** All but the number are null for a cable whose tension was never measured. */
export interface CableMeasures {
  /** From 1. */
  readonly cable: number;
  readonly meanTensionN: number | null;
  readonly peakTensionN: number | null;
  readonly slackS: number | null;
  readonly nearLimitS: number | null;
  readonly saturatedS: number | null;
  /** Rainflow cycles of 1 N or more: what wears the cable. */
  readonly loadCycles: number | null;
  readonly largestCycleN: number | null;
}

/** Adds up how long cables were in which state; one sample stands until the next. */
export interface TensionTimes {
  /** @param index row of the columns @param heldS how long this sample stands [s] */
  push(tensions: readonly ArrayLike<number>[], index: number, heldS: number): void;
  finish(): {
    readonly cables: CableMeasures[];
    /** Time in which any cable was measured [s]. */
    readonly measuredS: number;
    /** Time with at least one cable in the state [s]. */
    readonly slackS: number;
    readonly nearLimitS: number;
    readonly saturatedS: number;
    readonly meanTensionN: number | null;
    readonly peakTensionN: number | null;
  };
}

/**
 * Times of slack, near the limit (from 90 % of it on) and saturated, plainly by level; flags have hysteresis and least
 * durations instead. A tension that was not measured is in no state.
 *
 * @source ASTM E1049-85 for the load cycles
 */
export function tensionTimes({ cableCount, tensionMax, slackBelow }: TensionLimits): TensionTimes {
  const slack = new Float64Array(cableCount);
  const near = new Float64Array(cableCount);
  const saturated = new Float64Array(cableCount);
  const measured = new Float64Array(cableCount);
  const sum = new Float64Array(cableCount);
  const peak = new Float64Array(cableCount).fill(-Infinity);
  const cycles = new Float64Array(cableCount);
  const largest = new Float64Array(cableCount);
  const counters = Array.from({ length: cableCount }, (_, cable) =>
    rainflowCounter((range, _mean, count) => {
      cycles[cable] = (cycles[cable] as number) + count;
      largest[cable] = Math.max(largest[cable] as number, range);
    }, LEAST_CYCLE_N),
  );
  const any = { slack: 0, near: 0, saturated: 0, measured: 0 };
  const saturatedFrom = tensionMax - SATURATED_WITHIN_N;
  const nearFrom = NEAR_SHARE * tensionMax;
  return {
    push(tensions, index, heldS) {
      let lowest = Infinity;
      let highest = -Infinity;
      for (let cable = 0; cable < cableCount; cable++) {
        const tension = (tensions[cable] as ArrayLike<number>)[index] as number;
        if (Number.isNaN(tension)) continue;
        measured[cable] = (measured[cable] as number) + heldS;
        sum[cable] = (sum[cable] as number) + tension * heldS;
        if (tension > (peak[cable] as number)) peak[cable] = tension;
        if (tension < lowest) lowest = tension;
        if (tension > highest) highest = tension;
        if (tension < slackBelow) slack[cable] = (slack[cable] as number) + heldS;
        else if (tension >= nearFrom) {
          near[cable] = (near[cable] as number) + heldS;
          if (tension >= saturatedFrom) saturated[cable] = (saturated[cable] as number) + heldS;
        }
        (counters[cable] as { push(value: number): void }).push(tension);
      }
      if (highest === -Infinity) return;
      any.measured += heldS;
      if (lowest < slackBelow) any.slack += heldS;
      if (highest >= nearFrom) any.near += heldS;
      if (highest >= saturatedFrom) any.saturated += heldS;
    },
    finish() {
      for (const counter of counters) counter.finish();
      const cables = counters.map((_, cable) => {
        const known = (value: number | undefined): number | null => (peak[cable] === -Infinity ? null : (value as number));
        return {
          cable: cable + 1,
          meanTensionN: known((sum[cable] as number) / (measured[cable] as number)),
          peakTensionN: known(peak[cable]),
          slackS: known(slack[cable]),
          nearLimitS: known(near[cable]),
          saturatedS: known(saturated[cable]),
          loadCycles: known(cycles[cable]),
          largestCycleN: known(largest[cable]),
        };
      });
      const total = (values: Float64Array): number => values.reduce((all, value) => all + value, 0);
      const highest = peak.reduce((top, value) => Math.max(top, value), -Infinity);
      return {
        cables,
        measuredS: any.measured,
        slackS: any.slack,
        nearLimitS: any.near,
        saturatedS: any.saturated,
        meanTensionN: total(measured) > 0 ? total(sum) / total(measured) : null,
        peakTensionN: highest === -Infinity ? null : highest,
      };
    },
  };
}

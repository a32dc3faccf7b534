/**
 * One quantity of one cable going into a state and out of it, with hysteresis, minimum duration and merge gap.
 *
 * A value that was not measured neither begins nor ends a span. Only measured time counts towards the minimum duration:
 * a hole in the data longer than the minimum counts as one period, so that a blip before a gap stays a blip.
 */

/** What is watched, as predicates on one value. NaN must answer false to both. */
export type Level = {
  begins(value: number): boolean;
  ends(value: number): boolean;
  /** True when `value` is a more extreme peak than `peak`. */
  exceeds(value: number, peak: number): boolean;
};

export type SpanRule = { readonly minDurationUs: number; readonly mergeGapUs: number; readonly periodUs: number };

export type SpanState = {
  /** out; in; left: out again, but within the merge gap of a span that may go on. */
  phase: 'out' | 'in' | 'left';
  startUs: number;
  /** First sample out of the state, when `left`. */
  endUs: number;
  /** Last measured sample in the state. */
  lastInUs: number;
  /** Measured time in the state. */
  heldUs: number;
  peak: number;
  /** Last sample seen at all. */
  seenUs: number;
};

export type Span = { readonly startUs: number; readonly endUs: number; readonly peak: number };

export const spanAtRest: SpanState = { phase: 'out', startUs: 0, endUs: 0, lastInUs: 0, heldUs: 0, peak: 0, seenUs: 0 };

/** Times are decimal seconds times a million: half a µs covers their rounding. */
const roundingUs = 0.5;

/** Walks one column. Pure: returns the next state, pushes the spans that ended onto `ended`. */
export function walkSpan(from: SpanState, timesUs: Float64Array, values: ArrayLike<number>, count: number, level: Level, rule: SpanRule, ended: Span[]): SpanState {
  const state = { ...from };
  for (let i = 0; i < count; i += 1) {
    const value = values[i] as number;
    if (state.phase === 'out') {
      if (level.begins(value)) begin(state, timesUs[i] as number, value);
      continue;
    }
    const timeUs = timesUs[i] as number;
    if (state.phase === 'left') {
      if (level.begins(value) && timeUs - state.endUs <= rule.mergeGapUs + roundingUs) {
        state.phase = 'in';
        state.lastInUs = timeUs;
        if (level.exceeds(value, state.peak)) state.peak = value;
      } else if (timeUs - state.endUs > rule.mergeGapUs + roundingUs) {
        close(state, rule, ended);
        if (level.begins(value)) begin(state, timeUs, value);
      }
      continue;
    }
    if (value !== value) continue;
    state.heldUs += credit(timeUs - state.lastInUs, rule);
    if (level.ends(value)) {
      state.phase = 'left';
      state.endUs = timeUs;
      if (rule.mergeGapUs === 0) close(state, rule, ended);
    } else {
      state.lastInUs = timeUs;
      if (level.exceeds(value, state.peak)) state.peak = value;
    }
  }
  if (count > 0) state.seenUs = timesUs[count - 1] as number;
  return state;
}

/** The span that is going on and has lasted long enough to count, ended at the last sample seen. */
export function openSpan(state: SpanState, rule: SpanRule): Span | null {
  if (state.phase === 'out' || state.heldUs + roundingUs < rule.minDurationUs) return null;
  return { startUs: state.startUs, endUs: state.phase === 'left' ? state.endUs : state.seenUs, peak: state.peak };
}

function begin(state: SpanState, timeUs: number, value: number): void {
  state.phase = 'in';
  state.startUs = timeUs;
  state.lastInUs = timeUs;
  state.heldUs = 0;
  state.peak = value;
}

function close(state: SpanState, rule: SpanRule, ended: Span[]): void {
  if (state.heldUs + roundingUs >= rule.minDurationUs) ended.push({ startUs: state.startUs, endUs: state.endUs, peak: state.peak });
  state.phase = 'out';
}

function credit(stepUs: number, rule: SpanRule): number {
  return stepUs <= Math.max(rule.minDurationUs, 1.5 * rule.periodUs) ? stepUs : rule.periodUs;
}

/**
 * How a string looks along its way: taut, near the limit, saturated, slack, or not measured. The thresholds and their
 * hysteresis are those of the flag rules, so that the picture and the flags say the same.
 */
import type { Columns } from './columns';

export type StringState = 'taut' | 'near' | 'saturated' | 'slack' | 'missing';

export interface TensionLimits {
  /** N */
  readonly slackBelow: number;
  readonly tensionMax: number;
}

/** N: a slack ends above slackBelow + 0.2, a saturation begins at max - 0.05 and ends below max - 0.25. */
const SLACK_HYSTERESIS_N = 0.2;
const SATURATION_BEGINS_N = 0.05;
const SATURATION_ENDS_N = 0.25;
/** Share of the limit from which a string warns. A choice of this picture, not a flag rule. */
export const NEAR_SHARE = 0.9;

/** @param before the state just before, for the hysteresis */
export function stateOf(min: number, max: number, limits: TensionLimits, before: StringState): StringState {
  if (min !== min || max !== max) return 'missing';
  const saturatedFrom = limits.tensionMax - (before === 'saturated' ? SATURATION_ENDS_N : SATURATION_BEGINS_N);
  if (max >= saturatedFrom) return 'saturated';
  const slackBelow = limits.slackBelow + (before === 'slack' ? SLACK_HYSTERESIS_N : 0);
  if (min < slackBelow) return 'slack';
  return max >= limits.tensionMax * NEAR_SHARE ? 'near' : 'taut';
}

/** Half-open run of pixels in one state. */
export interface Run {
  readonly state: StringState;
  readonly from: number;
  readonly to: number;
}

export function runsOf(columns: Columns, limits: TensionLimits): Run[] {
  const runs: Run[] = [];
  let state: StringState = 'taut';
  let from = 0;
  const width = columns.min.length;
  for (let x = 0; x <= width; x += 1) {
    const next: StringState | null = x < width ? stateOf(columns.min[x] ?? Number.NaN, columns.max[x] ?? Number.NaN, limits, state) : null;
    if (x === 0 && next) state = next;
    if (next === state) continue;
    if (x > from) runs.push({ state, from, to: x });
    from = x;
    if (next) state = next;
  }
  return runs;
}

/** Half the thickness of a string in CSS px: tension over its limit, never thinner than a hair. */
export function halfThickness(tensionN: number, tensionMax: number, rowHeight: number): number {
  const share = Math.min(1, Math.max(0, tensionN / tensionMax));
  return 0.6 + share * rowHeight * 0.23;
}

/** How deep a slack string hangs in the middle, CSS px: deeper the longer it lasts on the page, within its row. */
export const sagDepth = (widthPx: number, rowHeight: number): number => Math.min(rowHeight * 0.62, 3.5 + widthPx * 0.22);

/**
 * Shape of the sag, 0 at the ends and 1 in the middle: a parabola (a hanging cord of small sag) that flattens when it
 * is long, because the ends should look like ends.
 * @param share 0 to 1 along the run
 */
export function sagShape(share: number, widthPx: number): number {
  const power = Math.max(2, widthPx / 55);
  return 1 - Math.abs(2 * share - 1) ** power;
}

const rank: Readonly<Record<StringState, number>> = { taut: 0, near: 1, slack: 2, saturated: 3, missing: 4 };

/**
 * Runs as they are shown: a slack of 70 ms in an hour is narrower than a pixel and must still be seen. Short runs of
 * the states that matter grow to a least width around their middle, at the expense of those that matter less.
 *
 * @param least columns per state; states not named keep their width
 */
export function shownRuns(runs: readonly Run[], width: number, least: Partial<Record<StringState, number>>): Run[] {
  const states = new Array<StringState>(width).fill('missing');
  const byRank = [...runs].sort((a, b) => rank[a.state] - rank[b.state]);
  for (const run of byRank) {
    const wanted = Math.min(width, least[run.state] ?? 0);
    const grow = Math.max(0, wanted - (run.to - run.from));
    const from = Math.max(0, run.from - Math.floor(grow / 2));
    const to = Math.min(width, run.to + Math.ceil(grow / 2));
    states.fill(run.state, from, to);
  }
  const shown: Run[] = [];
  let from = 0;
  for (let x = 1; x <= width; x += 1) {
    const state = states[from] ?? 'missing';
    if (x < width && states[x] === state) continue;
    shown.push({ state, from, to: x });
    from = x;
  }
  return shown;
}

import { requireSample } from '../stats/require-sample';

export interface LoadCycles {
  /** Height of the cycle, unit of the series. */
  readonly range: number;
  /** Middle of the cycle, unit of the series. */
  readonly mean: number;
  /** How often it occurred; half cycles count 0.5. */
  readonly count: number;
}

/** Counts cycles as samples come, holding only the reversals that are still open. */
export interface RainflowCounter {
  push(value: number): void;
  /** Counts what is still open as half cycles. Nothing may be pushed afterwards. */
  finish(): void;
}

/**
 * Rainflow counter that hands every cycle on as soon as it closes.
 *
 * @param onCycle takes height, middle and 1 or 0.5
 * @param leastRange reversals smaller than this are taken for noise and passed over; 0 keeps every one
 * @source ASTM E1049-85, 5.4.4
 */
export function rainflowCounter(
  onCycle: (range: number, mean: number, count: number) => void,
  leastRange = 0,
): RainflowCounter {
  const open: number[] = [];
  let candidate = Number.NaN;
  let direction = 0;
  const count = (from: number, to: number, share: number): void => onCycle(Math.abs(to - from), (from + to) / 2, share);
  const reversal = (value: number): void => {
    open.push(value);
    for (let size = open.length; size >= 3; size = open.length) {
      const last = open[size - 1] as number;
      const middle = open[size - 2] as number;
      const before = open[size - 3] as number;
      if (Math.abs(last - middle) < Math.abs(middle - before)) return;
      if (size === 3) {
        // The range holds the starting point: half a cycle, and the start moves on.
        count(before, middle, 0.5);
        open.shift();
      } else {
        count(before, middle, 1);
        open.splice(size - 3, 2);
      }
    }
  };
  return {
    push(value) {
      if (Number.isNaN(candidate)) {
        candidate = value;
        reversal(value);
        return;
      }
      const change = value - candidate;
      if (change * direction > 0) candidate = value;
      else if (Math.abs(change) > leastRange) {
        if (direction !== 0) reversal(candidate);
        direction = Math.sign(change);
        candidate = value;
      }
    },
    finish() {
      if (direction !== 0) reversal(candidate);
      for (let i = 1; i < open.length; i++) count(open[i - 1] as number, open[i] as number, 0.5);
      open.length = 0;
    },
  };
}

/**
 * Rainflow cycles of a load history: what fatigue of a cable is reckoned from.
 *
 * @param series loads in order; what was not measured must have been left out
 * @returns one entry for each pair of range and mean that occurred, by rising range, then mean; equal pairs (to rounding) are one
 *   entry; a level series has none
 * @throws NumericError TOO_SHORT below two values
 * @source ASTM E1049-85, 5.4.4
 * @example rainflow([-2, 1, -3, 5, -1, 3, -4, 4, -2]) // range 3: 0.5, 4: 1.5 (means -1 and 1), 6: 0.5, 8: 1 (means 0 and 1), 9: 0.5
 */
export function rainflow(series: ArrayLike<number>): LoadCycles[] {
  requireSample(series, 2, 'series');
  const cycles: LoadCycles[] = [];
  const counter = rainflowCounter((range, mean, count) => cycles.push({ range, mean, count }));
  let size = 0;
  for (let i = 0; i < series.length; i++) {
    counter.push(series[i] as number);
    size = Math.max(size, Math.abs(series[i] as number));
  }
  counter.finish();
  const rounding = 8 * Number.EPSILON * size;
  const merged: LoadCycles[] = [];
  const ranges = cycles.sort((a, b) => a.range - b.range);
  for (let start = 0; start < ranges.length; ) {
    const range = (ranges[start] as LoadCycles).range;
    let end = start;
    while (end < ranges.length && (ranges[end] as LoadCycles).range - range <= rounding) end++;
    const firstOfRange = merged.length;
    for (const cycle of ranges.slice(start, end).sort((a, b) => a.mean - b.mean)) {
      const previous = merged[merged.length - 1];
      if (previous !== undefined && merged.length > firstOfRange && cycle.mean - previous.mean <= rounding) {
        merged[merged.length - 1] = { ...previous, count: previous.count + cycle.count };
      } else merged.push({ range, mean: cycle.mean, count: cycle.count });
    }
    start = end;
  }
  return merged;
}

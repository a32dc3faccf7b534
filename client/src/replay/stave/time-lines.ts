/** Ruled lines of time: round steps, as many as the width carries. */
import { clock } from '../../lib/format';
import { lengthOf, type Span } from '../span';

export interface TimeLine {
  readonly atS: number;
  /** Null on the finer lines between. */
  readonly label: string | null;
}

/** Seconds between labelled lines, each with how many parts it is ruled into. */
const steps: readonly (readonly [number, number])[] = [
  [0.001, 1], [0.002, 2], [0.005, 5], [0.01, 5], [0.02, 4], [0.05, 5], [0.1, 5], [0.2, 4], [0.5, 5], [1, 5], [2, 4], [5, 5],
  [10, 5], [20, 4], [30, 3], [60, 6], [120, 4], [300, 5], [600, 5], [1200, 4], [1800, 3], [3600, 6],
];

/** @param labelPx room one label needs */
export function timeLines(view: Span, widthPx: number, labelPx = 76): TimeLine[] {
  if (lengthOf(view) <= 0 || widthPx <= 0) return [];
  const least = (lengthOf(view) / widthPx) * labelPx;
  const [stepS, parts] = steps.find(([step]) => step >= least) ?? [3600 * Math.ceil(least / 3600), 6];
  const fineS = stepS / parts;
  const decimals = stepS >= 1 ? 0 : stepS >= 0.1 ? 1 : stepS >= 0.01 ? 2 : 3;
  const lines: TimeLine[] = [];
  const first = Math.ceil(view.fromS / fineS - 1e-9);
  for (let i = first; i * fineS <= view.toS + 1e-9; i += 1) {
    const atS = i * fineS;
    lines.push({ atS, label: i % parts === 0 ? clock(atS, decimals) : null });
  }
  return lines;
}

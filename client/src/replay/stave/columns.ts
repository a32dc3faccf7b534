/**
 * One value band a pixel: what every picture over time is drawn from, at any zoom.
 *
 * Buckets and samples go the same way. Where several fall on one pixel their band is merged; where they are further
 * apart than a pixel the line between two neighbours is interpolated, unless a gap lies between them.
 */
import { GAP_PERIODS } from '../find-moment';
import type { Piece } from '../source';
import { lengthOf, type Span } from '../span';
import { indexAt } from '../stretch';

/** NaN where nothing was measured. */
export interface Columns {
  readonly min: Float32Array;
  readonly max: Float32Array;
  readonly mean: Float32Array;
}

export function makeColumns(width: number): Columns {
  return { min: new Float32Array(width), max: new Float32Array(width), mean: new Float32Array(width) };
}

/** One number column of a stretch: a channel, or a measure derived from several. */
export interface Series {
  readonly min: Float32Array;
  readonly max: Float32Array;
  readonly mean: Float32Array;
  /** Where the column starts in the arrays. */
  readonly offset: number;
}

/**
 * @param seriesOf  the column of a piece's stretch; null leaves the piece blank
 * @param view      the span that `out` covers from its first to its last pixel
 */
export function fillColumns(pieces: readonly Piece[], seriesOf: (piece: Piece) => Series | null, view: Span, rateHz: number, out: Columns): Columns {
  const width = out.min.length;
  out.min.fill(Number.NaN);
  out.max.fill(Number.NaN);
  out.mean.fill(Number.NaN);
  if (lengthOf(view) <= 0 || width === 0) return out;
  const perSecond = width / lengthOf(view);
  const longestStepS = GAP_PERIODS / rateHz;
  const weight = new Float32Array(width);
  // The value before: plain variables, because this runs for every sample of eight strings on every turn of a wheel.
  let joined = false;
  let lastX = 0;
  let lastEndS = 0;
  let lastMean = 0;

  for (const piece of pieces) {
    const series = seriesOf(piece);
    if (!series) {
      joined = false;
      continue;
    }
    const { stretch, span } = piece;
    const { startsS, endsS, count } = stretch;
    const first = Math.max(0, indexAt(startsS, Math.max(span.fromS, view.fromS)) - 1);
    for (let i = first; i < count; i += 1) {
      const startS = startsS[i] ?? 0;
      if (startS >= span.toS) break;
      // The one before the piece only serves to draw the line into it; the neighbour piece has drawn it itself.
      const endS = Math.max(startS, endsS[i] ?? startS);
      const min = series.min[series.offset + i] ?? Number.NaN;
      const max = series.max[series.offset + i] ?? Number.NaN;
      const mean = series.mean[series.offset + i] ?? Number.NaN;
      const x0 = (startS - view.fromS) * perSecond;
      const x1 = (endS - view.fromS) * perSecond;
      if (min === min) {
        if (joined && startS > lastEndS && startS - lastEndS <= longestStepS && x0 - lastX > 1) between(lastX, lastMean, x0, mean, out);
        merge(out, weight, x0, Math.max(x0, x1 - 1e-6), min, max, mean);
        joined = true;
        lastX = x1;
        lastEndS = endS;
        lastMean = mean;
      } else {
        joined = false;
      }
      if (x0 > width + 1) break;
    }
  }
  return out;
}

function merge(out: Columns, weight: Float32Array, x0: number, x1: number, min: number, max: number, mean: number): void {
  const from = Math.max(0, Math.floor(x0));
  const to = Math.min(out.min.length - 1, Math.floor(x1));
  for (let x = from; x <= to; x += 1) {
    const had = weight[x] ?? 0;
    if (had === 0) {
      out.min[x] = min;
      out.max[x] = max;
      out.mean[x] = mean;
    } else {
      out.min[x] = Math.min(out.min[x] ?? min, min);
      out.max[x] = Math.max(out.max[x] ?? max, max);
      out.mean[x] = ((out.mean[x] ?? mean) * had + mean) / (had + 1);
    }
    weight[x] = had + 1;
  }
}

/** Straight line between two samples that are more than a pixel apart. */
function between(x0: number, value0: number, x1: number, value1: number, out: Columns): void {
  const from = Math.max(0, Math.floor(x0) + 1);
  const to = Math.min(out.min.length - 1, Math.ceil(x1) - 1);
  for (let x = from; x <= to; x += 1) {
    const value = value0 + ((x - x0) / (x1 - x0)) * (value1 - value0);
    out.min[x] = value;
    out.max[x] = value;
    out.mean[x] = value;
  }
}

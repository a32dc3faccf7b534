/**
 * A running trial as a source: the newest seconds as they come over the live socket, kept in a ring of fixed size.
 *
 * What is past is cut into tiles that do not change any more, so that measures derived from them (speed, force) are computed
 * once; only the open end is made anew when samples come in. The page shows the last seconds and moves with the newest.
 */
import type { ChannelMap } from '@shared/recording/channels';
import { GAP_PERIODS } from '../find-moment';
import type { Gap, Moment, Piece, Source } from '../source';
import type { Span } from '../span';
import { stretchOfSamples, type Stretch } from '../stretch';

/** Length of the page that moves along, s, and where on it the newest sample stands. */
export const LIVE_PAGE_S = 12;
const NOW_AT = 0.94;
const TILE_S = 0.5;
/** Samples read from the book come thinned, with steps of their own; a real hole is far wider than either. */
const HOLE_STEPS = 4;
/** Samples beside a tile's edges that its measures look at, s. */
const MARGIN_S = 0.1;

export interface LiveSource extends Source {
  /** Time of the newest sample, s; -Infinity before the first. */
  readonly newestS: number;
  /** What came over the socket; samples at or before the newest are left out. @param values channel after channel */
  take(timesS: Float64Array, values: Float32Array): void;
  /** Spans of the page that no sample came for: the page was opened late, or the way to it was too narrow. Not yet gaps. */
  holes(): readonly Span[];
  /** Samples of a span, read from the book. What is still missing in it afterwards is a gap of the recording. */
  merge(stretch: Stretch, span: Span): void;
}

/** @param rateHz of the samples that are shown (after thinning), Hz */
export function createLiveSource(channels: ChannelMap, rateHz: number): LiveSource {
  const width = channels.names.length;
  const kept = Math.ceil((LIVE_PAGE_S + 4) * rateHz);
  const longestStepS = GAP_PERIODS / rateHz;
  const listeners = new Set<() => void>();
  /** Sample after sample, oldest first, in [first, end); moved to the front when the room behind is used up. */
  let timesS = new Float64Array(2 * kept);
  let rows = new Float32Array(2 * kept * width);
  let first = 0;
  let end = 0;
  const tiles = new Map<number, Stretch>();
  let open: Piece | null = null;
  const gaps: Gap[] = [];

  const newestS = () => (end > first ? (timesS[end - 1] ?? -Infinity) : -Infinity);
  const tell = () => {
    open = null;
    for (const listener of [...listeners]) listener();
  };

  const add = (count: number, timeOf: (i: number) => number, valueOf: (channel: number, i: number) => number, leastStepS = 0) => {
    for (let i = 0; i < count; i += 1) {
      const atS = timeOf(i);
      if (!(atS > newestS() + leastStepS)) continue;
      if (end === timesS.length) {
        const from = Math.max(first, end - kept);
        timesS.copyWithin(0, from, end);
        rows.copyWithin(0, from * width, end * width);
        end -= from;
        first = 0;
      }
      timesS[end] = atS;
      for (let channel = 0; channel < width; channel += 1) rows[end * width + channel] = valueOf(channel, i);
      end += 1;
      if (end - first > kept) first = end - kept;
    }
  };

  /** Index of the first sample at or after a time. */
  const indexFrom = (atS: number): number => {
    let low = first;
    let high = end;
    while (low < high) {
      const middle = (low + high) >> 1;
      if ((timesS[middle] ?? Infinity) < atS) low = middle + 1;
      else high = middle;
    }
    return low;
  };

  const cut = (fromS: number, toS: number): Stretch => {
    const [from, to] = [indexFrom(fromS), indexFrom(toS)];
    const count = to - from;
    const values = new Float32Array(count * width);
    for (let i = 0; i < count; i += 1) {
      for (let channel = 0; channel < width; channel += 1) values[channel * count + i] = rows[(from + i) * width + channel] ?? Number.NaN;
    }
    return stretchOfSamples(timesS.slice(from, to), values, { fromS, toS });
  };

  const isGap = (fromS: number, toS: number): boolean => gaps.some((gap) => gap.startS <= fromS + 1e-6 && gap.endS >= toS - 1e-6);

  const holes = (): Span[] => {
    if (end === first) return [];
    const found: Span[] = [];
    const { fromS } = page();
    const oldestS = timesS[first] ?? 0;
    if (oldestS - fromS > HOLE_STEPS * longestStepS && !isGap(fromS, oldestS)) found.push({ fromS, toS: oldestS });
    for (let i = first + 1; i < end; i += 1) {
      const [startS, endS] = [timesS[i - 1] ?? 0, timesS[i] ?? 0];
      if (endS - startS > HOLE_STEPS * longestStepS && endS > fromS && !isGap(startS, endS)) found.push({ fromS: startS, toS: endS });
    }
    return found;
  };

  const page = (): Span => {
    const newest = newestS();
    const fromS = Math.max(0, (Number.isFinite(newest) ? newest : 0) - NOW_AT * LIVE_PAGE_S);
    return { fromS, toS: fromS + LIVE_PAGE_S };
  };

  const fill = (index: number, known: Moment['known'], atS: number, out: Moment): Moment => {
    for (let channel = 0; channel < width; channel += 1) out.values[channel] = known === 'sample' ? (rows[index * width + channel] ?? Number.NaN) : Number.NaN;
    out.known = known;
    out.atS = known === 'sample' ? (timesS[index] ?? atS) : atS;
    return out;
  };

  return {
    channels,
    rateHz,
    get newestS() {
      return newestS();
    },
    take(times, values) {
      const had = newestS();
      const count = times.length;
      add(count, (i) => times[i] ?? Number.NaN, (channel, i) => values[channel * count + i] ?? Number.NaN);
      const oldest = timesS[first] ?? 0;
      for (const tile of tiles.keys()) if ((tile + 1) * TILE_S < oldest) tiles.delete(tile);
      if (newestS() !== had) tell();
    },
    holes,
    merge(stretch, span) {
      const came = { timesS: timesS.slice(first, end), rows: rows.slice(first * width, end * width) };
      timesS = new Float64Array(2 * kept);
      rows = new Float32Array(2 * kept * width);
      first = 0;
      end = 0;
      tiles.clear();
      const cameValue = (channel: number, i: number) => came.rows[i * width + channel] ?? Number.NaN;
      const before = came.timesS.findIndex((atS) => atS >= span.fromS);
      const split = before < 0 ? came.timesS.length : before;
      add(split, (i) => came.timesS[i] ?? Number.NaN, cameValue);
      // Both sources hold the same samples where they overlap: whichever comes first in time is taken, once.
      let [a, b] = [0, split];
      while (a < stretch.count || b < came.timesS.length) {
        const [readS, cameS] = [stretch.startsS[a] ?? Infinity, came.timesS[b] ?? Infinity];
        if (cameS <= readS + 0.25 / rateHz) {
          const i = b;
          add(1, () => cameS, (channel) => cameValue(channel, i));
          b += 1;
        } else {
          const i = a;
          add(1, () => readS, (channel) => stretch.mean[channel * stretch.count + i] ?? Number.NaN, 0.75 / rateHz);
          a += 1;
        }
      }
      for (const hole of holes()) if (Math.min(hole.toS, span.toS) - Math.max(hole.fromS, span.fromS) > HOLE_STEPS * longestStepS) gaps.push({ startS: hole.fromS, endS: hole.toS, missing: null });
      tell();
    },
    extent: page,
    gaps: () => gaps,
    overview: () => null,
    pieces(span) {
      if (end === first) return [];
      const oldestTile = Math.max(0, Math.floor(Math.max(timesS[first] ?? 0, span.fromS) / TILE_S));
      const openTile = Math.max(oldestTile, Math.floor((newestS() - MARGIN_S) / TILE_S));
      const result: Piece[] = [];
      for (let tile = oldestTile; tile < openTile; tile += 1) {
        const own = { fromS: tile * TILE_S, toS: (tile + 1) * TILE_S };
        let stretch = tiles.get(tile);
        if (!stretch) {
          stretch = cut(own.fromS - MARGIN_S, own.toS + MARGIN_S);
          tiles.set(tile, stretch);
        }
        result.push({ stretch, span: own });
      }
      open ??= { stretch: cut(openTile * TILE_S - MARGIN_S, Infinity), span: { fromS: openTile * TILE_S, toS: newestS() + 1 / rateHz } };
      result.push(open);
      return result;
    },
    momentAt(atS, out) {
      const index = indexFrom(atS + 0.5 / rateHz) - 1;
      if (index < first) return fill(0, end === first ? 'loading' : 'outside', atS, out);
      const last = index === end - 1;
      return fill(index, !last && atS - (timesS[index] ?? 0) > HOLE_STEPS * longestStepS ? 'gap' : 'sample', atS, out);
    },
    sampleStep: () => null,
    heading: () => undefined,
    trouble: () => null,
    retry: () => undefined,
    onChange(listener) {
      listeners.add(listener);
      return () => listeners.delete(listener);
    },
    rest: () => undefined,
  };
}

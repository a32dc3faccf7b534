/**
 * The source over a stored recording: fetches windows on a grid, keeps the most recently used ones, and always answers
 * with the best that is at hand, so that no seek shows an empty page. It never holds a whole long recording.
 */
import type { ChannelMap } from '@shared/recording/channels';
import { fillMoment } from './find-moment';
import type { Gap, Moment, Piece, Source } from './source';
import { contains, lengthOf, type Span } from './span';
import { indexAt, type Stretch } from './stretch';
import { BUCKETS_A_TILE, levelFor, parentOf, tileKey, tileLengthS, tileSpan, tilesAhead, tilesOver, levelForSpeed, type Tile } from './tiles';

/** Fetches one window; rejects when aborted or when the server cannot answer. */
export type LoadWindow = (span: Span, buckets: number, signal: AbortSignal) => Promise<Stretch>;

export interface RecordingShape {
  readonly channels: ChannelMap;
  readonly rateHz: number;
  readonly durationS: number;
  readonly gaps: readonly Gap[];
  readonly growing: boolean;
}

export interface WindowCache extends Source {
  /** A growing recording got longer, or was closed. */
  grow(shape: RecordingShape): void;
  /** Bytes held, for the memory test. */
  heldBytes(): number;
}

export interface CacheOptions {
  readonly budgetBytes?: number;
  readonly inFlight?: number;
}

const OVERVIEW = 'overview';
const OVERVIEW_BUCKETS = 2048;

interface Wanted {
  readonly key: string;
  readonly span: Span;
  readonly buckets: number;
}

export function createWindowCache(first: RecordingShape, load: LoadWindow, { budgetBytes = 96e6, inFlight = 4 }: CacheOptions = {}): WindowCache {
  const { channels, rateHz } = first;
  let shape = first;
  /** Insertion order is order of use: the oldest is at the front. */
  const held = new Map<string, Stretch>();
  const flying = new Map<string, AbortController>();
  const failed = new Set<string>();
  /** Held, shown, and fetched anew: what reached the old end of a growing recording. */
  const stale = new Set<string>();
  const listeners = new Set<() => void>();
  let bytes = 0;
  let trouble: string | null = null;
  /** Put aside: fetches nothing until somebody reads again. */
  let resting = false;
  /** What each reader asked for last, most urgent first. */
  const wants = { moment: [] as Wanted[], overview: [] as Wanted[], view: [] as Wanted[], ahead: [] as Wanted[] };

  const tell = () => {
    for (const listener of [...listeners]) listener();
  };
  const extent = (): Span => ({ fromS: 0, toS: shape.durationS });
  /** The end is inside the span that is asked for: the last sample belongs to it. */
  const endS = () => shape.durationS + 0.5 / rateHz;

  const wantedTile = (tile: Tile): Wanted => {
    const span = tileSpan(tile, rateHz);
    return { key: tileKey(tile), span: { fromS: span.fromS, toS: Math.min(span.toS, Math.max(endS(), span.fromS + 1 / rateHz)) }, buckets: BUCKETS_A_TILE };
  };
  const wantedOverview = (): Wanted => ({ key: OVERVIEW, span: { fromS: 0, toS: Math.max(endS(), 1 / rateHz) }, buckets: OVERVIEW_BUCKETS });

  const touch = (key: string): Stretch | undefined => {
    const stretch = held.get(key);
    if (stretch && key !== OVERVIEW) {
      held.delete(key);
      held.set(key, stretch);
    }
    return stretch;
  };

  const drop = (key: string) => {
    const stretch = held.get(key);
    if (!stretch) return;
    bytes -= stretch.bytes;
    held.delete(key);
    stale.delete(key);
  };

  const keep = (key: string, stretch: Stretch) => {
    drop(key);
    stale.delete(key);
    held.set(key, stretch);
    bytes += stretch.bytes;
    for (const oldest of [...held.keys()]) {
      if (bytes <= budgetBytes || oldest === key) break;
      if (oldest !== OVERVIEW) drop(oldest);
    }
  };

  const pump = () => {
    if (resting) return;
    const queue = [...wants.moment, ...wants.overview, ...wants.view, ...wants.ahead];
    const stillWanted = new Set(queue.map((wanted) => wanted.key));
    for (const [key, controller] of flying) {
      if (!stillWanted.has(key)) controller.abort();
    }
    for (const wanted of queue) {
      if (flying.size >= inFlight) return;
      const wanting = !held.has(wanted.key) || stale.has(wanted.key);
      if (wanting && !flying.has(wanted.key) && !failed.has(wanted.key)) void fetchOne(wanted);
    }
  };

  const fetchOne = async (wanted: Wanted) => {
    const controller = new AbortController();
    flying.set(wanted.key, controller);
    try {
      const stretch = await load(wanted.span, wanted.buckets, controller.signal);
      if (controller.signal.aborted) return;
      keep(wanted.key, stretch);
      trouble = failed.size > 0 ? trouble : null;
      tell();
    } catch (error) {
      if (controller.signal.aborted) return;
      failed.add(wanted.key);
      trouble = error instanceof Error ? error.message : 'A part of the recording did not load.';
      tell();
    } finally {
      if (flying.get(wanted.key) === controller) flying.delete(wanted.key);
      pump();
    }
  };

  /** The best at hand for one tile: itself, a coarser one, or the overview. */
  const standIn = (tile: Tile): Stretch | undefined => {
    let coarser = tile;
    for (let i = 0; i < 8; i += 1) {
      coarser = parentOf(coarser);
      const stretch = held.get(tileKey(coarser));
      if (stretch) return stretch;
    }
    return held.get(OVERVIEW);
  };

  /** A level above which one tile covers everything is the overview's business. */
  const topLevel = () => Math.max(0, Math.ceil(Math.log2(Math.max(1, shape.durationS / tileLengthS(0, rateHz)))));

  const pieces = (span: Span, widthPx: number): readonly Piece[] => {
    const level = Math.min(levelFor(span, widthPx, rateHz), topLevel());
    const tiles = tilesOver(span, level, extent(), rateHz);
    resting = false;
    wants.view = tiles.map(wantedTile);
    wants.overview = [wantedOverview()];
    const result: Piece[] = [];
    for (const tile of tiles) {
      const stretch = touch(tileKey(tile)) ?? standIn(tile);
      if (stretch) result.push({ stretch, span: tileSpan(tile, rateHz) });
    }
    pump();
    return result;
  };

  const fineTile = (atS: number): Tile => ({ level: 0, index: Math.max(0, Math.floor((atS + 0.5 / rateHz) / tileLengthS(0, rateHz))) });

  const momentAt = (atS: number, out: Moment): Moment => {
    if (!contains(extent(), atS) || shape.durationS < 0) {
      out.values.fill(Number.NaN);
      out.known = 'outside';
      out.atS = atS;
      return out;
    }
    const tile = fineTile(atS);
    const own = touch(tileKey(tile));
    if (own && fillMoment(own, atS, rateHz, out)) return out;
    // A gap across the tile's edge: the sample before it is in the tile before.
    if (own && inGap(shape.gaps, atS)) {
      out.values.fill(Number.NaN);
      out.known = 'gap';
      out.atS = atS;
      return out;
    }
    const stand = standIn(tile);
    if (stand && fillMoment(stand, atS, rateHz, out)) return out;
    out.values.fill(Number.NaN);
    out.known = 'loading';
    out.atS = atS;
    return out;
  };

  return {
    channels,
    rateHz,
    extent,
    gaps: () => shape.gaps,
    overview: () => held.get(OVERVIEW) ?? null,
    pieces,
    momentAt,
    sampleStep(atS, count) {
      const stretch = held.get(tileKey(fineTile(atS)));
      if (!stretch || stretch.level !== 'samples') return null;
      return stretch.startsS[indexAt(stretch.startsS, atS + 0.5 / rateHz) + count] ?? null;
    },
    heading(atS, speed) {
      resting = false;
      const level = levelForSpeed(speed);
      const here = level === 0 ? fineTile(atS) : { level, index: Math.floor(atS / tileLengthS(level, rateHz)) };
      wants.moment = contains(extent(), atS) ? [wantedTile(here)] : [];
      wants.ahead = tilesAhead(atS, speed, extent(), rateHz).map(wantedTile);
      wants.overview = [wantedOverview()];
      pump();
    },
    trouble: () => trouble,
    retry() {
      failed.clear();
      trouble = null;
      tell();
      pump();
    },
    grow(next) {
      const grew = next.durationS !== shape.durationS || next.growing !== shape.growing;
      const oldEndS = shape.durationS;
      shape = next;
      if (!grew) return;
      for (const [key, stretch] of held) {
        if (stretch.span.toS >= oldEndS) stale.add(key);
      }
      tell();
    },
    heldBytes: () => bytes,
    onChange(listener) {
      listeners.add(listener);
      return () => listeners.delete(listener);
    },
    rest() {
      resting = true;
      for (const part of Object.keys(wants) as (keyof typeof wants)[]) wants[part] = [];
      for (const controller of flying.values()) controller.abort();
      for (const key of [...held.keys()]) drop(key);
    },
  };
}

function inGap(gaps: readonly Gap[], atS: number): boolean {
  return gaps.some((gap) => atS > gap.startS && atS < gap.endS && lengthOf({ fromS: gap.startS, toS: gap.endS }) > 0);
}

/**
 * Which windows of a recording to ask for. Windows lie on a fixed grid, so that leafing back finds them in the cache
 * (and the browser's own cache for ever, once a recording is closed).
 *
 * Level 0 holds single samples; each level up spans twice the time in as many buckets.
 */
import { lengthOf, type Span } from './span';

export interface Tile {
  readonly level: number;
  readonly index: number;
}

/** Samples in a tile of level 0. A little below the buckets asked for, so that a clock that runs fast still fits. */
export const SAMPLES_A_TILE = 2000;
export const BUCKETS_A_TILE = 2048;

export const tileKey = (tile: Tile): string => `${tile.level}/${tile.index}`;

export const tileLengthS = (level: number, rateHz: number): number => (SAMPLES_A_TILE / rateHz) * 2 ** level;

export function tileSpan(tile: Tile, rateHz: number): Span {
  const lengthS = tileLengthS(tile.level, rateHz);
  return { fromS: tile.index * lengthS, toS: (tile.index + 1) * lengthS };
}

/** The coarsest level that still has a bucket for every pixel. */
export function levelFor(span: Span, widthPx: number, rateHz: number): number {
  const bucketsWanted = (lengthOf(span) * rateHz) / Math.max(1, widthPx);
  return Math.max(0, Math.floor(Math.log2(Math.max(1, bucketsWanted))));
}

/** Tiles of one level that touch a span, in order, inside the recording's extent. */
export function tilesOver(span: Span, level: number, extent: Span, rateHz: number): Tile[] {
  const lengthS = tileLengthS(level, rateHz);
  const fromS = Math.max(span.fromS, extent.fromS);
  const toS = Math.min(span.toS, extent.toS);
  if (toS < fromS) return [];
  const first = Math.floor(fromS / lengthS);
  const last = Math.max(first, Math.ceil(toS / lengthS) - 1);
  return Array.from({ length: last - first + 1 }, (_, i) => ({ level, index: first + i }));
}

export const parentOf = (tile: Tile): Tile => ({ level: tile.level + 1, index: Math.floor(tile.index / 2) });

/** The level whose tiles hold about as much as one frame of playing shows; 0 up to ordinary speeds. */
export const levelForSpeed = (speed: number): number => (Math.abs(speed) < 4 ? 0 : Math.floor(Math.log2(Math.abs(speed))) - 1);

/** Tiles to have ready ahead of the reading line, nearest first. */
export function tilesAhead(atS: number, speed: number, extent: Span, rateHz: number): Tile[] {
  const level = levelForSpeed(speed);
  const lengthS = tileLengthS(level, rateHz);
  const here = Math.floor(atS / lengthS);
  const direction = speed < 0 ? -1 : 1;
  return [1, 2]
    .map((step) => ({ level, index: here + step * direction }))
    .filter((tile) => tile.index >= 0 && tile.index * lengthS < extent.toS);
}

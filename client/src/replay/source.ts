/**
 * What the player reads from: a closed or growing recording through the window cache, or a running trial through the
 * live ring. Samples never pass through React: readers ask once a frame and are told when more came in.
 */
import type { ChannelMap } from '@shared/recording/channels';
import type { Span } from './span';
import type { Stretch } from './stretch';

/** Part of a stretch that is to be drawn, so that neighbours of different width do not overlap. */
export interface Piece {
  readonly stretch: Stretch;
  readonly span: Span;
}

export interface Gap {
  readonly startS: number;
  readonly endS: number;
  /** Samples that are missing, when the device counted them. */
  readonly missing: number | null;
}

/**
 * How a moment is known: `sample` exactly, `average` from a bucket while the samples are on their way, `gap` nothing
 * was recorded there, `loading` nothing is at hand yet, `outside` before the start or after the end.
 */
export type MomentKnown = 'sample' | 'average' | 'gap' | 'loading' | 'outside';

/** One moment of every channel; the array is reused from frame to frame. */
export interface Moment {
  known: MomentKnown;
  /** Time of the sample shown, s. */
  atS: number;
  readonly values: Float32Array;
}

export const emptyMoment = (channels: ChannelMap): Moment => ({ known: 'loading', atS: 0, values: new Float32Array(channels.names.length).fill(Number.NaN) });

export interface Source {
  readonly channels: ChannelMap;
  readonly rateHz: number;
  extent(): Span;
  gaps(): readonly Gap[];
  /** The whole recording at one width; null until it is loaded. */
  overview(): Stretch | null;
  /** What is at hand for a span, finest first choice about one bucket a pixel; what is missing is fetched. */
  pieces(span: Span, widthPx: number): readonly Piece[];
  /** Fills `out` with the sample at or just before a moment. */
  momentAt(atS: number, out: Moment): Moment;
  /** Time of the sample `count` samples from the one at `atS`; null when not at hand. */
  sampleStep(atS: number, count: number): number | null;
  /** Where the reading line is heading (recording seconds per second, 0 when it stands), for fetching ahead. */
  heading(atS: number, speed: number): void;
  /** A sentence when the last fetch failed, else null. */
  trouble(): string | null;
  /** Fetches again what failed. */
  retry(): void;
  /** Told when more is at hand, the extent grew or trouble came or went. */
  onChange(listener: () => void): () => void;
  /** Takes fetches back and lets go of what is held; reading again wakes it. */
  rest(): void;
}

/**
 * The part of a recording that the stave shows. Like the clock it lives outside React: a wheel turn moves it sixty
 * times a second and only the canvas needs to know.
 */
import { clampTo, lengthOf, type Span } from './span';

export interface View {
  readonly span: Span;
  readonly extent: Span;
  /** Everything is in sight. */
  readonly whole: boolean;
  set(span: Span): void;
  /** Zooms by a factor (below 1 is closer) so that `aroundS` stays where it is on the page. */
  zoom(factor: number, aroundS: number): void;
  pan(deltaS: number): void;
  /** Turns the page so that a moment is in sight; does nothing when it is. */
  reveal(atS: number, at?: number): void;
  showAll(): void;
  setExtent(extent: Span): void;
  onChange(listener: () => void): () => void;
}

/** Sixteen samples across the page are close enough to see each of them. */
const fewestSamples = 16;

export function createView(firstExtent: Span, rateHz: number, firstSpan: Span = firstExtent): View {
  const listeners = new Set<() => void>();
  let extent = withLength(firstExtent, rateHz);
  let span = inside(firstSpan, extent, rateHz);

  const set = (next: Span) => {
    const placed = inside(next, extent, rateHz);
    if (placed.fromS === span.fromS && placed.toS === span.toS) return;
    span = placed;
    for (const listener of [...listeners]) listener();
  };

  return {
    get span() {
      return span;
    },
    get extent() {
      return extent;
    },
    get whole() {
      return lengthOf(span) >= lengthOf(extent) * 0.999;
    },
    set,
    zoom(factor, aroundS) {
      const length = Math.min(lengthOf(extent), Math.max(fewestSamples / rateHz, lengthOf(span) * factor));
      const share = lengthOf(span) > 0 ? (aroundS - span.fromS) / lengthOf(span) : 0.5;
      const fromS = aroundS - share * length;
      set({ fromS, toS: fromS + length });
    },
    pan: (deltaS) => set({ fromS: span.fromS + deltaS, toS: span.toS + deltaS }),
    reveal(atS, at = 0.12) {
      if (atS >= span.fromS && atS <= span.toS) return;
      const fromS = atS - at * lengthOf(span);
      set({ fromS, toS: fromS + lengthOf(span) });
    },
    showAll: () => set(extent),
    setExtent(next) {
      const wasWhole = lengthOf(span) >= lengthOf(extent) * 0.999;
      const before = extent;
      extent = withLength(next, rateHz);
      if (extent.fromS === before.fromS && extent.toS === before.toS) return;
      span = inside(wasWhole ? extent : span, extent, rateHz);
      for (const listener of [...listeners]) listener();
    },
    onChange(listener) {
      listeners.add(listener);
      return () => listeners.delete(listener);
    },
  };
}

/** A recording of one sample has no length; the page still needs one. */
function withLength(extent: Span, rateHz: number): Span {
  return lengthOf(extent) >= 2 / rateHz ? extent : { fromS: extent.fromS, toS: extent.fromS + 2 / rateHz };
}

/** Moves a span into the extent without changing its length where that is possible. */
export function inside(span: Span, extent: Span, rateHz: number): Span {
  const length = Math.min(lengthOf(extent), Math.max(lengthOf(span), Math.min(fewestSamples / rateHz, lengthOf(extent))));
  const fromS = clampTo({ fromS: extent.fromS, toS: extent.toS - length }, span.fromS);
  return { fromS, toS: fromS + length };
}

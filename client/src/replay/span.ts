/** A stretch of a recording's own time, seconds; `toS` is the first moment after it. */
export interface Span {
  readonly fromS: number;
  readonly toS: number;
}

export const lengthOf = (span: Span): number => span.toS - span.fromS;

export const contains = (span: Span, atS: number): boolean => atS >= span.fromS && atS <= span.toS;

export const clampTo = (span: Span, atS: number): number => Math.min(span.toS, Math.max(span.fromS, atS));

/** The two ends in order, whichever way they were dragged. */
export const spanBetween = (oneS: number, otherS: number): Span => ({ fromS: Math.min(oneS, otherS), toS: Math.max(oneS, otherS) });

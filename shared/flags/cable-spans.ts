/** A detector that watches one column of each cable with the same level: slack, saturation, slip. */
import type { Chunk } from '../recording/chunk';
import { secondsOf, type Detector, type DetectorContext } from './detector';
import type { Flag, FlagKind } from './flag';
import { openSpan, spanAtRest, walkSpan, type Level, type Span, type SpanRule, type SpanState } from './span';

export type CableSpansState = readonly SpanState[];

type CableColumn = (chunk: Chunk, context: DetectorContext, cable: number) => ArrayLike<number>;

/** @param columnOf the values of a cable, numbered from 0 */
export function cableSpans(kind: FlagKind, cableCount: number, level: Level, rule: SpanRule, columnOf: CableColumn): Detector<CableSpansState> {
  const flagOf = (span: Span, cable: number): Flag => ({ kind, cable: cable + 1, startS: secondsOf(span.startUs), endS: secondsOf(span.endUs), peak: span.peak });
  const goingOn = (state: CableSpansState): Flag[] =>
    state.flatMap((span, cable) => {
      const open = openSpan(span, rule);
      return open ? [flagOf(open, cable)] : [];
    });
  return {
    start: () => Array.from({ length: cableCount }, () => spanAtRest),
    step(state, chunk, context) {
      const flags: Flag[] = [];
      const next = state.map((from, cable) => {
        const ended: Span[] = [];
        const to = walkSpan(from, chunk.timesUs, columnOf(chunk, context, cable), chunk.count, level, rule, ended);
        for (const span of ended) flags.push(flagOf(span, cable));
        return to;
      });
      return [next, flags];
    },
    open: (state) => goingOn(state).map((flag) => ({ ...flag, open: true })),
    finish: goingOn,
  };
}

export function spanRule(rule: { minDurationS: number; mergeGapS: number }, rateHz: number): SpanRule {
  return { minDurationUs: rule.minDurationS * 1e6, mergeGapUs: rule.mergeGapS * 1e6, periodUs: 1e6 / rateHz };
}

/** The tension column of a cable, numbered from 0. */
export const tensionOf: CableColumn = (chunk, { map }, cable) => chunk.columns[map.tensions[cable] as number] as Float32Array;

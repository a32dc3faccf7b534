/** Saturation: a cable's tension reaches the limit and has not fallen below the release. */
import { cableSpans, spanRule, tensionOf, type CableSpansState } from './cable-spans';
import type { Detector } from './detector';
import type { SaturationRule } from './rules';

export function saturationDetector(rule: SaturationRule, cableCount: number, rateHz: number): Detector<CableSpansState> {
  const onset = Math.fround(rule.onsetN);
  const release = Math.fround(rule.releaseN);
  const level = { begins: (t: number) => t >= onset, ends: (t: number) => t < release, exceeds: (t: number, peak: number) => t > peak };
  return cableSpans('saturation', cableCount, level, spanRule(rule, rateHz), tensionOf);
}

/** Slack: a cable's tension falls below the onset and has not come back above the release. */
import { cableSpans, spanRule, tensionOf, type CableSpansState } from './cable-spans';
import type { Detector } from './detector';
import type { SlackRule } from './rules';

export function slackDetector(rule: SlackRule, cableCount: number, rateHz: number): Detector<CableSpansState> {
  // Recorded tensions are float32: 0.9000 N must compare equal to a rule of 0.9 N.
  const onset = Math.fround(rule.onsetN);
  const release = Math.fround(rule.releaseN);
  const level = { begins: (t: number) => t < onset, ends: (t: number) => t > release, exceeds: (t: number, peak: number) => t < peak };
  return cableSpans('slack', cableCount, level, spanRule(rule, rateHz), tensionOf);
}

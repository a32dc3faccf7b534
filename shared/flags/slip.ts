/** Slip: a measured length departs from the inverse kinematics of the measured pose, as when a cable slips on its drum. */
import { cableSpans, spanRule, type CableSpansState } from './cable-spans';
import type { Detector } from './detector';
import type { SlipRule } from './rules';

export function slipDetector(rule: SlipRule, cableCount: number, rateHz: number): Detector<CableSpansState> {
  const level = {
    begins: (departure: number) => Math.abs(departure) > rule.departureM,
    ends: (departure: number) => Math.abs(departure) <= rule.releaseM,
    exceeds: (departure: number, peak: number) => Math.abs(departure) > Math.abs(peak),
  };
  return cableSpans('slip', cableCount, level, spanRule(rule, rateHz), (_, { residualsM }, cable) => residualsM[cable] as Float64Array);
}

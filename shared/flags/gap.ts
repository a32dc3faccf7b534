/** Gap: two samples further apart than one and a half periods. Start is the last sample before, end the first after. */
import { secondsOf, type Detector } from './detector';
import type { Flag } from './flag';
import type { GapRule } from './rules';

export type GapState = { readonly lastUs: number | null };

export function gapDetector(rule: GapRule, rateHz: number): Detector<GapState> {
  const longestUs = (rule.periods * 1e6) / rateHz;
  return {
    start: () => ({ lastUs: null }),
    step(state, { timesUs, count }) {
      const flags: Flag[] = [];
      let lastUs = state.lastUs;
      for (let i = 0; i < count; i += 1) {
        const timeUs = timesUs[i] as number;
        if (lastUs !== null && timeUs - lastUs > longestUs) flags.push({ kind: 'gap', startS: secondsOf(lastUs), endS: secondsOf(timeUs) });
        lastUs = timeUs;
      }
      return [{ lastUs }, flags];
    },
    open: () => [],
    finish: () => [],
  };
}

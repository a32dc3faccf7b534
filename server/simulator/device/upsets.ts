/** What an unreliable device does to its own frames: leaves some out, says some twice, drops the line. */
import type { DeviceMessage } from '@shared/link';
import type { Random } from '../random';

export type Upsets = {
  /** Share of batches that are left out the first time. */
  lose?: number;
  /** Share of batches that are sent twice. */
  repeat?: number;
  /** Mean time between breaks of the link, s. */
  breakEveryS?: number;
};

export interface UpsetPlan {
  /** How often to send this message now: 0, 1 or 2 times. */
  times(message: DeviceMessage): number;
  /** Until the next break, ms; null: it never breaks. */
  nextBreakMs(): number | null;
}

export function planUpsets(upsets: Upsets, random: Random): UpsetPlan {
  const { lose = 0, repeat = 0, breakEveryS } = upsets;
  return {
    times(message) {
      if (message.type !== 'batch') return 1;
      const chance = random.uniform();
      if (chance < lose) return 0;
      return chance < lose + repeat ? 2 : 1;
    },
    // Breaks without memory come at exponential times.
    nextBreakMs: () => (breakEveryS === undefined ? null : -1000 * breakEveryS * Math.log(1 - random.uniform())),
  };
}

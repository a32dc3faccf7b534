/** A machine-found moment of a recording. */
export type FlagKind = 'slack' | 'saturation' | 'near-limit' | 'gap' | 'slip' | 'oscillation' | 'unreachable' | 'active' | 'drop';

/** How much a flag weighs; each detector says in its rule file by which figure. */
export const severities = ['slight', 'marked', 'severe'] as const;
export type Severity = (typeof severities)[number];

export type Flag = {
  readonly kind: FlagKind;
  /** Numbered from 1; absent when the moment is not one cable's. */
  readonly cable?: number;
  /** [start, end): first sample in the state, first sample out of it; the recording's own clock, s. */
  readonly startS: number;
  readonly endS: number;
  /** Slack: lowest tension, N. Saturation: highest tension, N. Slip: largest departure with its sign, m. Oscillation: amplitude, m. */
  readonly peak?: number;
  /** Time of the peak, s. */
  readonly peakS?: number;
  readonly severity?: Severity;
  /** What the detector saw at the peak, by name with its unit (`tensionN`, `energyJ`): plain figures, finite. */
  readonly evidence?: Readonly<Record<string, number>>;
  /** Still going on at the last sample seen; `endS` is then that sample's time. */
  readonly open?: true;
};

/** By start, then kind, then cable: the order in which flags are listed everywhere. */
export function byStart(a: Flag, b: Flag): number {
  return a.startS - b.startS || (a.kind < b.kind ? -1 : a.kind > b.kind ? 1 : 0) || (a.cable ?? 0) - (b.cable ?? 0);
}

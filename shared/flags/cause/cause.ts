/** Why a flag happened, as found by statics at its peak: a code, one sentence with figures, and what a picture of it needs. */
export const causeKinds = ['workspace-edge', 'demand-beyond-limits', 'pretension-low', 'fast-movement', 'sensor-trouble', 'unknown'] as const;
export type CauseKind = (typeof causeKinds)[number];

/** Tensions that balance the same hand wrench are t + lambda n; where the rig was is lambda = 0. All in N along the unit null vector. */
export type NullLine = {
  /** Unit null vector, one entry a cable. */
  readonly direction: readonly number[];
  /** Recorded tensions at the moment, N. */
  readonly tensions: readonly number[];
  /** Lambda within which each cable keeps the controller's limits, N; low above high never occurs, infinite ends are null. */
  readonly perCable: readonly { readonly low: number | null; readonly high: number | null }[];
  /** Lambda within which all do; null: none. */
  readonly feasible: { readonly low: number; readonly high: number } | null;
};

/** The smallest single change that removes the flag; none is given when there is none. */
export type Help = { readonly change: 'tensionMax' | 'tensionMin' | 'pretension'; readonly fromN: number; readonly toN: number; readonly sentence: string };

export type Cause = {
  readonly kind: CauseKind;
  readonly sentence: string;
  /** By name with unit, finite. */
  readonly figures: Readonly<Record<string, number>>;
  /** Cable that binds, from 1. */
  readonly cable?: number;
  readonly nullLine?: NullLine;
  readonly help?: Help;
};

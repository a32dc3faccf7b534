/** Which entries of the margin the reading line stands in; the set changes only when one is entered or left. */
import { useEffect, useEffectEvent, useState } from 'react';
import type { Clock } from '../../replay/clock';

export interface Entry {
  readonly id: string;
  readonly startS: number;
  readonly endS: number | null;
}

/** A point counts while the line is this near, s. */
const NEAR_S = 0.05;

export function entriesAt(entries: readonly Entry[], atS: number): string[] {
  return entries.filter(({ startS, endS }) => (endS === null ? Math.abs(atS - startS) <= NEAR_S : atS >= startS - 5e-4 && atS <= endS + 5e-4)).map(({ id }) => id);
}

export function useHere(clock: Clock, entries: readonly Entry[]): ReadonlySet<string> {
  const [here, setHere] = useState<ReadonlySet<string>>(new Set());
  const look = useEffectEvent(() => {
    const now = entriesAt(entries, clock.atS);
    setHere((before) => (before.size === now.length && now.every((id) => before.has(id)) ? before : new Set(now)));
  });
  useEffect(() => {
    look();
    return clock.onMoment(look);
  }, [clock]);
  useEffect(() => look(), [entries]);
  return here;
}

import { useEffect, useEffectEvent } from 'react';
import type { Clock } from '../../replay/clock';
import type { Span } from '../../replay/span';
import { writePlace } from './place-in-address';

/** Long enough that a scrub writes once at its end: browsers refuse addresses that change too often, ms. */
const AFTER_MS = 350;

/** Keeps the address on the reader's place. Replaced, not pushed: "back" leaves the page, it does not scrub. */
export function usePlaceInAddress(clock: Clock, selection: Span | null): void {
  const write = useEffectEvent(() => {
    const next = writePlace(location.search, clock.atS, selection);
    if (next !== location.search) history.replaceState(history.state, '', `${location.pathname}${next}${location.hash}`);
  });
  useEffect(() => {
    let waiting: ReturnType<typeof setTimeout> | null = null;
    const soon = () => {
      if (waiting) clearTimeout(waiting);
      if (!clock.state.playing) waiting = setTimeout(write, AFTER_MS);
    };
    const stops = [clock.onMoment(soon), clock.onState(soon)];
    return () => {
      if (waiting) clearTimeout(waiting);
      for (const stop of stops) stop();
    };
  }, [clock]);
  // The first rendering of a plain address leaves it plain.
  const hasSpan = selection !== null;
  useEffect(() => {
    if (hasSpan || new URLSearchParams(location.search).has('from')) write();
  }, [hasSpan, selection]);
}

/**
 * Keeps the reading line on the page while the clock runs: far out the page is turned when the line reaches its edge,
 * close up the strings glide under a standing line. Also tells the source where the line is heading.
 */
import type { Clock } from './clock';
import type { Source } from './source';
import { contains, lengthOf } from './span';
import type { View } from './view';

/** Pages that would be turned more often than this glide instead, s of the reader's time. */
const GLIDE_BELOW_S = 3;
const TURN_MS = 220;

export function followClock(clock: Clock, view: View, source: Source, reducedMotion: () => boolean): () => void {
  let turning: number | null = null;

  const turnTo = (fromS: number) => {
    if (turning !== null) cancelAnimationFrame(turning);
    const length = lengthOf(view.span);
    if (reducedMotion()) {
      view.set({ fromS, toS: fromS + length });
      return;
    }
    const startS = view.span.fromS;
    const startMs = performance.now();
    const step = () => {
      const share = Math.min(1, (performance.now() - startMs) / TURN_MS);
      const eased = 1 - (1 - share) ** 3;
      const at = startS + (fromS - startS) * eased;
      view.set({ fromS: at, toS: at + length });
      turning = share < 1 ? requestAnimationFrame(step) : null;
    };
    turning = requestAnimationFrame(step);
  };

  const stops = [
    clock.onMoment((atS) => {
      const { playing, speed } = clock.state;
      source.heading(atS, playing ? speed : 0);
      const length = lengthOf(view.span);
      if (!playing || view.whole) return;
      if (length / speed < GLIDE_BELOW_S) {
        // The line walks to the middle of the page and stays there.
        const middle = view.span.fromS + length / 2;
        if (atS > middle || !contains(view.span, atS)) view.set({ fromS: atS - length / 2, toS: atS + length / 2 });
      } else if (turning === null && (atS > view.span.fromS + length * 0.96 || !contains(view.span, atS))) {
        turnTo(atS - length * 0.06);
      }
    }),
    clock.onState(() => source.heading(clock.atS, clock.state.playing ? clock.state.speed : 0)),
  ];
  source.heading(clock.atS, 0);
  return () => {
    if (turning !== null) cancelAnimationFrame(turning);
    for (const stop of stops) stop();
  };
}

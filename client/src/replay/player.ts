/** A source with its clock and its view: all that the stave, the scene and the table of a page share. */
import { browserPorts, createClock, type Clock } from './clock';
import { followClock } from './follow';
import type { Source } from './source';
import type { Span } from './span';
import { createView, type View } from './view';

export interface Player {
  readonly source: Source;
  readonly clock: Clock;
  readonly view: View;
  /** Wires the three together; returns how to put the player aside. */
  start(): () => void;
}

const reducedMotion = () => matchMedia('(prefers-reduced-motion: reduce)').matches;

/** @param first where to open: moment and visible span, both optional */
export function createPlayer(source: Source, first: { atS?: number | undefined; span?: Span | undefined } = {}): Player {
  const extent = source.extent();
  const clock = createClock(extent, source.rateHz, browserPorts((atS, count) => source.sampleStep(atS, count)), first.atS);
  const view = createView(extent, source.rateHz, first.span);
  return {
    source,
    clock,
    view,
    start() {
      const stopFollowing = followClock(clock, view, source, reducedMotion);
      const stopGrowing = source.onChange(() => {
        const now = source.extent();
        clock.setExtent(now);
        view.setExtent(now);
      });
      return () => {
        clock.pause();
        stopFollowing();
        stopGrowing();
        source.rest();
      };
    },
  };
}

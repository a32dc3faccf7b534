/** What the commands do to a player; the page adds its own (notes, cameras, tables). */
import type { CommandId } from './commands';
import type { Player } from './player';
import { lengthOf } from './span';

/** @returns false when the command is not one of the player's */
export function runPlayerCommand({ clock, view }: Player, id: CommandId): boolean {
  const { extent } = clock.state;
  const step = (deltaS: number) => {
    clock.stepS(deltaS);
    view.reveal(clock.atS, deltaS < 0 ? 0.88 : 0.12);
  };
  switch (id) {
    case 'toggle':
      if (!clock.state.playing) view.reveal(clock.atS);
      clock.toggle();
      return true;
    case 'sample-back':
    case 'sample-on':
      clock.stepSamples(id === 'sample-on' ? 1 : -1);
      view.reveal(clock.atS);
      return true;
    case 'step-back':
      step(-0.01);
      return true;
    case 'step-on':
      step(0.01);
      return true;
    case 'second-back':
      step(-1);
      return true;
    case 'second-on':
      step(1);
      return true;
    case 'page-back':
    case 'page-on': {
      const delta = lengthOf(view.span) * (id === 'page-on' ? 0.9 : -0.9);
      view.pan(delta);
      clock.seek(clock.atS + delta);
      view.reveal(clock.atS);
      return true;
    }
    case 'start':
      clock.seek(extent.fromS);
      view.reveal(clock.atS);
      return true;
    case 'end':
      clock.seek(extent.toS);
      view.reveal(clock.atS, 0.95);
      return true;
    case 'slower':
      clock.changeSpeed(-1);
      return true;
    case 'faster':
      clock.changeSpeed(1);
      return true;
    case 'true-speed':
      clock.setSpeed(1);
      return true;
    case 'closer':
    case 'further':
      view.reveal(clock.atS, 0.5);
      view.zoom(id === 'closer' ? 0.6 : 1 / 0.6, clock.atS);
      return true;
    case 'whole':
      view.showAll();
      return true;
    case 'to-line': {
      const half = lengthOf(view.span) / 2;
      view.set({ fromS: clock.atS - half, toS: clock.atS + half });
      return true;
    }
    default:
      return false;
  }
}

/** The next of some moments after (1) or before (-1) the line; a moment the line stands on does not count. */
export function nextMoment(momentsS: readonly number[], atS: number, direction: 1 | -1): number | null {
  const slack = 0.0006;
  const candidates = momentsS.filter((moment) => (direction > 0 ? moment > atS + slack : moment < atS - slack));
  if (candidates.length === 0) return null;
  return direction > 0 ? Math.min(...candidates) : Math.max(...candidates);
}

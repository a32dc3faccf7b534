/** The foot of the page: play, where we are, how fast, what is looped, where to go next. */
import { useEffect, useRef, useSyncExternalStore, type ReactNode } from 'react';
import { clock as clockText } from '../lib/format';
import { classNames } from '../ui/class-names';
import { speeds, type Clock } from './clock';
import { spanText, speedText } from './moment-text';
import type { CommandId } from './commands';
import type { Span } from './span';

interface ClockBarProps {
  readonly clock: Clock;
  readonly run: (id: CommandId) => void;
  readonly selection: Span | null;
  readonly flags: number;
  readonly notes: number;
  readonly children?: ReactNode;
}

const BUTTON = 'text-small text-soft hover:text-ink min-h-8 whitespace-nowrap disabled:opacity-55 disabled:hover:text-soft';

export function ClockBar({ clock, run, selection, flags, notes, children }: ClockBarProps) {
  const state = useSyncExternalStore(clock.onState, () => clock.state);
  const nothing = state.extent.toS <= state.extent.fromS;
  return (
    <div role="group" aria-label="Clock" className="flex flex-wrap items-center gap-x-5 gap-y-0 px-6 max-sm:px-4 py-1.5 border-t border-rule">
      <button type="button" onClick={() => run('toggle')} disabled={nothing} aria-label={state.playing ? 'Pause' : 'Play'} className="size-9 grid place-items-center -ml-2.5 hover:bg-hover rounded-edge">
        <svg viewBox="0 0 14 14" width="14" height="14" aria-hidden className="fill-ink">
          {state.playing ? <path d="M2 1h3.5v12H2zM8.5 1H12v12H8.5z" /> : <path d="M2.5 1L13 7L2.5 13z" />}
        </svg>
      </button>
      <p className="text-body">
        <Position clock={clock} /> <span className="text-small text-soft ml-2">of {clockText(state.extent.toS, 3)}</span>
      </p>
      <label className="text-small text-soft flex items-center">
        <span className="sr-only">Speed</span>
        <select value={state.speed} onChange={(event) => clock.setSpeed(Number(event.target.value))} className="bg-transparent min-h-8 hover:text-ink">
          {speeds.map((speed) => <option key={speed} value={speed}>{speedText(speed)}</option>)}
        </select>
      </label>
      {state.loop || selection ? (
        <button type="button" aria-pressed={state.loop !== null} onClick={() => run('loop')} className={classNames(BUTTON, state.loop && 'font-bold text-ink')}>
          {state.loop ? `loops ${spanText(state.loop.fromS, state.loop.toS)}` : 'loop the span L'}
        </button>
      ) : null}
      {children}
      <div className="ml-auto flex flex-wrap gap-x-5 max-sm:ml-0">
        <button type="button" onClick={() => run('next-flag')} disabled={flags === 0} className={BUTTON}>next flag <kbd aria-hidden className="font-sans">F</kbd></button>
        <button type="button" onClick={() => run('next-note')} disabled={notes === 0} className={BUTTON}>next note <kbd aria-hidden className="font-sans">G</kbd></button>
        <button type="button" onClick={() => run('whole')} className={BUTTON}>whole <kbd aria-hidden className="font-sans">0</kbd></button>
        <button type="button" onClick={() => run('table')} className={BUTTON}>table <kbd aria-hidden className="font-sans">T</kbd></button>
        <button type="button" onClick={() => run('keys')} className={BUTTON}>keys <kbd aria-hidden className="font-sans">?</kbd></button>
      </div>
    </div>
  );
}

/** Written past React: it changes every frame. */
function Position({ clock }: { clock: Clock }) {
  const text = useRef<HTMLSpanElement>(null);
  useEffect(() => {
    const write = () => {
      if (text.current) text.current.textContent = clockText(clock.atS, 3);
    };
    write();
    return clock.onMoment(write);
  }, [clock]);
  return <span ref={text} data-testid="position" className="font-extrabold inline-block min-w-18" />;
}

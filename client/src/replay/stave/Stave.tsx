/** The stave: the cables as strings over time. Two canvases and a slider's manners around them. */
import { useEffect, useEffectEvent, useRef, useState, type KeyboardEvent } from 'react';
import { cablesInWords } from '../moment-words';
import { spokenMoment } from '../moment-text';
import { usePalette } from '../palette';
import type { Player } from '../player';
import { emptyMoment } from '../source';
import type { Span } from '../span';
import type { OtherReader } from './draw-reading';
import { listenToPointers } from './pointer-gestures';
import { createStavePainter, type StaveContent, type StavePainter } from './stave-painter';

export interface StaveProps {
  readonly player: Player;
  readonly content: StaveContent;
  readonly label: string;
  readonly others?: readonly OtherReader[];
  /** Room the page may take, CSS px; strings give way down to their least height. */
  readonly height: number;
  /** The newest seconds of a running trial: a picture that moves by itself, without a line to take hold of. */
  readonly live?: boolean;
  readonly onSelect?: (span: Span | null) => void;
  readonly onFlag?: (ids: readonly string[]) => void;
  readonly onNote?: (ids: readonly string[]) => void;
  readonly onKeyDown?: (event: KeyboardEvent<HTMLElement>) => void;
  /** For the benches and the tests. */
  readonly onPainter?: (painter: StavePainter | null) => void;
}

const nothing: readonly OtherReader[] = [];
/** How often a voice may be told the position while the clock runs, ms. */
const TELL_EVERY_MS = 1000;

export function Stave({ player, content, label, others = nothing, height, live = false, onSelect, onFlag, onNote, onKeyDown, onPainter }: StaveProps) {
  const frame = useRef<HTMLDivElement>(null);
  const below = useRef<HTMLCanvasElement>(null);
  const above = useRef<HTMLCanvasElement>(null);
  const painter = useRef<StavePainter | null>(null);
  const palette = usePalette();
  const [pageHeight, setPageHeight] = useState(height);
  const firstContent = useEffectEvent(() => content);
  const firstPalette = useEffectEvent(() => palette);
  const select = useEffectEvent((span: Span | null) => onSelect?.(span));
  const flag = useEffectEvent((ids: readonly string[]) => onFlag?.(ids));
  const note = useEffectEvent((ids: readonly string[]) => onNote?.(ids));
  const tellPainter = useEffectEvent((made: StavePainter | null) => onPainter?.(made));
  const roomNow = useEffectEvent(() => height);

  useEffect(() => {
    const [box, lower, upper] = [frame.current, below.current, above.current];
    if (!box || !lower || !upper) return;
    const made = createStavePainter({ ...player, below: lower, above: upper, live, onHeight: setPageHeight }, firstContent(), firstPalette());
    painter.current = made;
    tellPainter(made);
    const measure = () => made.setSize(box.clientWidth, roomNow(), Math.min(3, devicePixelRatio || 1));
    measure();
    const observer = new ResizeObserver(measure);
    observer.observe(box);
    const stopPointers = live ? () => undefined : listenToPointers(box, { ...player, painter: made, onSelect: select, onFlag: flag, onNote: note });
    return () => {
      observer.disconnect();
      stopPointers();
      made.close();
      painter.current = null;
      tellPainter(null);
    };
  }, [player, live]);

  useEffect(() => painter.current?.setContent(content), [content]);
  useEffect(() => painter.current?.setPalette(palette), [palette]);
  useEffect(() => painter.current?.setOthers(others), [others]);
  useEffect(() => {
    const box = frame.current;
    if (box) painter.current?.setSize(box.clientWidth, height, Math.min(3, devicePixelRatio || 1));
  }, [height]);
  useSliderWords(frame, player, content, live);

  return (
    <div
      ref={frame}
      {...(live ? { role: 'img' } : { role: 'slider', tabIndex: 0, 'aria-orientation': 'horizontal', 'aria-valuemin': 0, 'aria-valuemax': 0, 'aria-valuenow': 0 })}
      aria-label={label}
      onKeyDown={onKeyDown}
      data-testid="stave"
      className="relative w-full touch-pan-y select-none outline-offset-[-2px]"
      style={{ height: pageHeight }}
    >
      <canvas ref={below} aria-hidden className="absolute inset-0 size-full" />
      <canvas ref={above} aria-hidden className="absolute inset-0 size-full" />
    </div>
  );
}

/** The slider's value and words, written past React: they change with the clock. */
function useSliderWords(frame: React.RefObject<HTMLDivElement | null>, { clock, source }: Player, { limits }: StaveContent, live: boolean) {
  useEffect(() => {
    const box = frame.current;
    if (!box || live) return;
    const moment = emptyMoment(source.channels);
    let lastMs = -Infinity;
    const write = () => {
      const { extent } = clock.state;
      source.momentAt(clock.atS, moment);
      box.setAttribute('aria-valuemin', extent.fromS.toFixed(3));
      box.setAttribute('aria-valuemax', extent.toS.toFixed(3));
      box.setAttribute('aria-valuenow', clock.atS.toFixed(3));
      box.setAttribute('aria-valuetext', `${spokenMoment(clock.atS)} of ${spokenMoment(extent.toS)}, ${cablesInWords(moment, source.channels, limits)}`);
    };
    const onMoment = () => {
      if (clock.state.playing && performance.now() - lastMs < TELL_EVERY_MS) return;
      lastMs = performance.now();
      write();
    };
    write();
    const stops = [clock.onMoment(onMoment), clock.onState(write), source.onChange(write)];
    return () => {
      for (const stop of stops) stop();
    };
  }, [frame, clock, source, limits, live]);
}

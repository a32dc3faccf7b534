/**
 * What a hand does on the stave: drag the line, drag the page, drag a span, wheel and pinch to zoom, drag the overview.
 * Plain events, no framework, so that replay and live page share it.
 */
import type { Clock } from '../clock';
import { clampTo, lengthOf, spanBetween, type Span } from '../span';
import type { View } from '../view';
import { timeAt, xOf, zoneAt } from './page-layout';
import type { StavePainter } from './stave-painter';

export interface GestureTargets {
  readonly clock: Clock;
  readonly view: View;
  readonly painter: StavePainter;
  /** A span was dragged; null takes the selection back. */
  onSelect(span: Span | null): void;
  /** Marks and slips under a click. */
  onFlag(ids: readonly string[]): void;
  onNote(ids: readonly string[]): void;
}

type Drag =
  | { kind: 'line' }
  | { kind: 'page'; fromS: number; moved: boolean }
  | { kind: 'span'; fromS: number }
  | { kind: 'overview'; offsetS: number }
  | null;

/** Less than this is a click, CSS px. */
const CLICK_PX = 4;
/** How near the pointer must be to take the line. */
const LINE_PX = 9;

export function listenToPointers(element: HTMLElement, targets: GestureTargets): () => void {
  const { clock, view, painter } = targets;
  const pointers = new Map<number, { x: number; y: number }>();
  let drag: Drag = null;
  let startX = 0;
  let startY = 0;

  const at = (event: PointerEvent | WheelEvent) => {
    const box = element.getBoundingClientRect();
    return { x: event.clientX - box.left, y: event.clientY - box.top };
  };
  const time = (x: number) => clampTo(view.extent, timeAt(painter.layout(), view.span, x));
  const overviewTime = (x: number) => {
    const { left, across } = painter.layout();
    return view.extent.fromS + ((x - left) / across) * lengthOf(view.extent);
  };

  const beginDrag = (event: PointerEvent, x: number, y: number): Drag => {
    const layout = painter.layout();
    const zone = zoneAt(layout, x, y);
    if (zone === 'overview') {
      const t = overviewTime(x);
      const inside = t >= view.span.fromS && t <= view.span.toS && !view.whole;
      return { kind: 'overview', offsetS: inside ? t - view.span.fromS : lengthOf(view.span) / 2 };
    }
    if (zone === 'gutter') return null;
    const nearLine = Math.abs(x - xOf(layout, view.span, clock.atS)) <= LINE_PX;
    if (nearLine && !event.shiftKey && zone !== 'slips') return { kind: 'line' };
    if (event.shiftKey || zone === 'slips') return { kind: 'span', fromS: time(x) };
    return { kind: 'page', fromS: timeAt(layout, view.span, x), moved: false };
  };

  const onDown = (event: PointerEvent) => {
    if (event.button !== 0) return;
    const { x, y } = at(event);
    pointers.set(event.pointerId, { x, y });
    element.setPointerCapture(event.pointerId);
    if (pointers.size === 2) {
      drag = null;
      return;
    }
    startX = x;
    startY = y;
    drag = beginDrag(event, x, y);
    if (drag?.kind === 'line') painter.setHeld(true);
  };

  const pinch = (id: number, next: { x: number; y: number }) => {
    const other = [...pointers.entries()].find(([key]) => key !== id)?.[1];
    const before = pointers.get(id);
    if (!other || !before) return;
    const [wasApart, isApart] = [Math.abs(before.x - other.x), Math.abs(next.x - other.x)];
    const middle = (next.x + other.x) / 2;
    if (wasApart > 8 && isApart > 8) view.zoom(wasApart / isApart, timeAt(painter.layout(), view.span, middle));
    view.pan(-(((next.x - before.x) / 2) / painter.layout().across) * lengthOf(view.span));
  };

  const onMove = (event: PointerEvent) => {
    const next = at(event);
    const zone = zoneAt(painter.layout(), next.x, next.y);
    if (!pointers.has(event.pointerId)) {
      painter.setHover(event.pointerType === 'mouse' && zone !== 'gutter' && zone !== 'overview' ? next.x : null);
      element.style.cursor = cursorOver(next.x, next.y);
      return;
    }
    if (pointers.size === 2) pinch(event.pointerId, next);
    pointers.set(event.pointerId, next);
    if (pointers.size !== 1 || !drag) return;
    painter.setHover(null);
    if (drag.kind === 'line') {
      clock.pause();
      clock.seek(time(next.x));
    } else if (drag.kind === 'page') {
      if (!drag.moved && Math.hypot(next.x - startX, next.y - startY) < CLICK_PX) return;
      drag.moved = true;
      element.style.cursor = 'grabbing';
      view.pan(drag.fromS - timeAt(painter.layout(), view.span, next.x));
    } else if (drag.kind === 'span') {
      if (Math.abs(next.x - startX) >= CLICK_PX) targets.onSelect(spanBetween(drag.fromS, time(next.x)));
    } else {
      const fromS = overviewTime(next.x) - drag.offsetS;
      view.set({ fromS, toS: fromS + lengthOf(view.span) });
    }
  };

  const onUp = (event: PointerEvent) => {
    const known = pointers.delete(event.pointerId);
    const { x, y } = at(event);
    const ended = drag;
    if (pointers.size === 0) drag = null;
    painter.setHeld(false);
    if (!known || !ended || event.type === 'pointercancel') return;
    if (Math.hypot(x - startX, y - startY) >= CLICK_PX) return;
    click(x, y);
  };

  const click = (x: number, y: number) => {
    const mark = painter.marks().find((candidate) => x >= candidate.x - 9 && x <= candidate.x + 22 && Math.abs(y - candidate.y) <= 9);
    if (mark) {
      targets.onFlag(mark.ids);
      return;
    }
    const slip = painter.slips().find((candidate) => x >= candidate.left && x <= candidate.left + candidate.width && y >= candidate.top && y <= candidate.top + candidate.height);
    if (slip) {
      targets.onNote(slip.ids);
      return;
    }
    const zone = zoneAt(painter.layout(), x, y);
    if (zone === 'overview') {
      const t = clampTo(view.extent, overviewTime(x));
      const length = lengthOf(view.span);
      if (!view.whole) view.set({ fromS: t - length / 2, toS: t + length / 2 });
      clock.seek(t);
    } else if (zone !== 'gutter') {
      targets.onSelect(null);
      clock.seek(time(x));
    }
  };

  const cursorOver = (x: number, y: number): string => {
    const layout = painter.layout();
    const zone = zoneAt(layout, x, y);
    if (zone === 'gutter') return 'default';
    if (zone === 'overview') return 'grab';
    if (painter.marks().some((mark) => x >= mark.x - 9 && x <= mark.x + 22 && Math.abs(y - mark.y) <= 9)) return 'pointer';
    if (painter.slips().some((slip) => x >= slip.left && x <= slip.left + slip.width && y >= slip.top && y <= slip.top + slip.height)) return 'pointer';
    if (zone === 'slips') return 'text';
    return Math.abs(x - xOf(layout, view.span, clock.atS)) <= LINE_PX ? 'ew-resize' : 'crosshair';
  };

  const onWheel = (event: WheelEvent) => {
    const { x, y } = at(event);
    const layout = painter.layout();
    if (x < layout.left) return;
    const sideways = event.shiftKey || Math.abs(event.deltaX) > Math.abs(event.deltaY);
    event.preventDefault();
    const unit = event.deltaMode === WheelEvent.DOM_DELTA_LINE ? 16 : 1;
    if (sideways) view.pan((((event.deltaX || event.deltaY) * unit) / layout.across) * lengthOf(view.span));
    else view.zoom(Math.exp(event.deltaY * unit * (event.ctrlKey ? 0.01 : 0.0018)), zoneAt(layout, x, y) === 'overview' ? overviewTime(x) : timeAt(layout, view.span, x));
  };

  const onLeave = () => painter.setHover(null);

  element.addEventListener('pointerdown', onDown);
  element.addEventListener('pointermove', onMove);
  element.addEventListener('pointerup', onUp);
  element.addEventListener('pointercancel', onUp);
  element.addEventListener('pointerleave', onLeave);
  element.addEventListener('wheel', onWheel, { passive: false });
  return () => {
    element.removeEventListener('pointerdown', onDown);
    element.removeEventListener('pointermove', onMove);
    element.removeEventListener('pointerup', onUp);
    element.removeEventListener('pointercancel', onUp);
    element.removeEventListener('pointerleave', onLeave);
    element.removeEventListener('wheel', onWheel);
  };
}

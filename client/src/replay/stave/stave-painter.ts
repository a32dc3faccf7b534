/**
 * Paints the stave's page on two sheets: what changes with the view or the data below, what changes with the clock
 * above. Each change asks for one frame; many changes before that frame are one drawing; nothing draws while nothing
 * changes.
 */
import type { Clock } from '../clock';
import type { Palette } from '../palette';
import { drawRibbon, ribbonScale, type RibbonScale } from '../ribbons/draw-ribbon';
import { channelSeries, type Ribbon } from '../ribbons/ribbons';
import { emptyMoment, type Piece, type Source } from '../source';
import { lengthOf, type Span } from '../span';
import { indexAt } from '../stretch';
import type { View } from '../view';
import { fillColumns, makeColumns, type Columns } from './columns';
import { drawMarks, placeMarks, type DrawnMark, type MarkedFlag } from './draw-marks';
import { drawOverview, overviewColumns } from './draw-overview';
import { drawHover, drawOthers, drawReadingLine, drawRibbonValues, drawTensionValues, type OtherReader } from './draw-reading';
import { drawSlips, placeSlips, type DrawnSlip, type NoteSlip } from './draw-slips';
import { drawGaps, drawString, emptyBecause } from './draw-strings';
import { font } from './page-font';
import { layOutPage, stringMiddle, timeAt, xOf, type PageLayout } from './page-layout';
import type { TensionLimits } from './string-runs';
import { timeLines } from './time-lines';

export interface StaveContent {
  readonly limits: TensionLimits;
  readonly ribbons: readonly Ribbon[];
  readonly flags: readonly MarkedFlag[];
  readonly notes: readonly NoteSlip[];
  readonly selection: Span | null;
  readonly loop: Span | null;
  /** Flag or note that the reader points at in the margin. */
  readonly litId: string | null;
}

export interface StavePainter {
  setContent(content: StaveContent): void;
  setPalette(palette: Palette): void;
  setOthers(others: readonly OtherReader[]): void;
  setSize(width: number, height: number, density: number): void;
  setHover(x: number | null): void;
  setHeld(held: boolean): void;
  layout(): PageLayout;
  marks(): readonly DrawnMark[];
  slips(): readonly DrawnSlip[];
  /** Times of how long drawings took, for the benches: last below, last above, ms. */
  cost(): { below: number; above: number };
  close(): void;
}

export interface StavePorts {
  readonly below: HTMLCanvasElement;
  readonly above: HTMLCanvasElement;
  readonly source: Source;
  readonly clock: Clock;
  readonly view: View;
  /** A page that moves along with a running trial: no room for slips, no strip of the whole. */
  readonly live: boolean;
  /** Told when the layout's height changed. */
  readonly onHeight: (height: number) => void;
}

export function createStavePainter(ports: StavePorts, firstContent: StaveContent, firstPalette: Palette): StavePainter {
  const { source, clock, view } = ports;
  let content = firstContent;
  let palette = firstPalette;
  let others: readonly OtherReader[] = [];
  let density = 1;
  let size = { width: 0, height: 0 };
  let layout = layOutPage({ width: 0, height: 0, cables: source.channels.cableCount, ribbons: content.ribbons.length, notes: !ports.live, overview: !ports.live });
  let columns: Columns = makeColumns(0);
  let strip: { overview: unknown; width: number; extentS: number; columns: Columns | null } = { overview: null, width: 0, extentS: 0, columns: null };
  let marks: readonly DrawnMark[] = [];
  let slips: readonly DrawnSlip[] = [];
  let pieces: readonly Piece[] = [];
  let hoverX: number | null = null;
  let held = false;
  let dirty = { below: true, above: true };
  let frame: number | null = null;
  const cost = { below: 0, above: 0 };
  const moment = emptyMoment(source.channels);

  const ask = (part: Partial<typeof dirty>) => {
    dirty = { below: dirty.below || part.below === true, above: dirty.above || part.above === true };
    frame ??= requestAnimationFrame(paint);
  };

  const place = () => {
    const before = layout.height;
    layout = layOutPage({ ...size, cables: source.channels.cableCount, ribbons: content.ribbons.length, notes: !ports.live, overview: !ports.live });
    const width = Math.max(0, Math.round(layout.across * density));
    if (columns.min.length !== width) columns = makeColumns(width);
    for (const canvas of [ports.below, ports.above]) {
      const [w, h] = [Math.round(layout.width * density), Math.round(layout.height * density)];
      if (canvas.width !== w || canvas.height !== h) {
        canvas.width = w;
        canvas.height = h;
      }
    }
    if (layout.height !== before) ports.onHeight(layout.height);
  };

  const paint = () => {
    frame = null;
    if (size.width === 0) return;
    const startMs = performance.now();
    if (dirty.below) paintBelow();
    const middleMs = performance.now();
    if (dirty.below) cost.below = middleMs - startMs;
    if (dirty.above || dirty.below) {
      paintAbove();
      cost.above = performance.now() - middleMs;
    }
    dirty = { below: false, above: false };
  };

  const begin = (canvas: HTMLCanvasElement): CanvasRenderingContext2D | null => {
    const context = canvas.getContext('2d');
    context?.setTransform(density, 0, 0, density, 0, 0);
    context?.clearRect(0, 0, layout.width, layout.height);
    return context;
  };

  const paintBelow = () => {
    const context = begin(ports.below);
    if (!context) return;
    const { span } = view;
    const x = (atS: number) => xOf(layout, span, atS);
    const right = layout.left + layout.across;
    pieces = source.pieces(span, layout.across * density);
    wash(context, content.loop, x, 0.5);
    wash(context, content.selection, x, 1);
    ruleTimes(context, x);
    const empty = emptyBecause(pieces, source.gaps(), span, columns.min.length);
    source.channels.tensions.forEach((channel, i) => {
      fillColumns(pieces, ({ stretch }) => channelSeries(stretch, channel), span, source.rateHz, columns);
      drawString(context, columns, content.limits, { left: layout.left, middle: stringMiddle(layout, i + 1), row: layout.strings.row, density }, palette, empty);
    });
    const clip = { left: layout.left, right };
    const bottom = layout.times.top - 2;
    drawGaps(context, source.gaps(), x, layout.strings.top - 2, layout.strings.height + 4, clip, palette);
    content.ribbons.forEach((ribbon, i) => {
      const lane = layout.ribbons[i];
      if (!lane) return;
      fillColumns(pieces, ({ stretch }) => ribbon.series(stretch), span, source.rateHz, columns);
      drawRibbon(context, columns, lane, layout.left, density, scaleOf(ribbon), palette);
    });
    const ribbonsTop = layout.ribbons[0]?.top ?? bottom;
    drawGaps(context, source.gaps(), x, ribbonsTop, Math.max(0, bottom - ribbonsTop), clip, palette);
    marks = placeMarks(content.flags, layout, x);
    drawMarks(context, marks, palette, content.litId);
    slips = placeSlips(context, content.notes, layout, x);
    drawSlips(context, slips, layout, x, palette, content.litId);
    if (!ports.live) drawOverview(context, stripColumns(), { source, limits: content.limits, flags: content.flags, notes: content.notes }, layout, span, palette);
  };

  /** The same scale at every zoom: taken from the whole recording, so that a ribbon does not breathe while zooming. */
  const scaleOf = (ribbon: Ribbon): RibbonScale => {
    if (ribbon.high !== null) return ribbonScale(ribbon, 0);
    let largest = 0;
    const overview = source.overview();
    for (const stretch of overview ? [overview, ...pieces.map((piece) => piece.stretch)] : pieces.map((piece) => piece.stretch)) {
      const series = ribbon.series(stretch);
      for (let i = 0; i < stretch.count; i += 1) {
        const value = series.max[series.offset + i] ?? 0;
        if (value > largest) largest = value;
      }
    }
    return ribbonScale(ribbon, largest);
  };

  const stripColumns = (): Columns | null => {
    const overview = source.overview();
    const width = Math.round(layout.across);
    const extentS = lengthOf(source.extent());
    if (strip.overview !== overview || strip.width !== width || strip.extentS !== extentS) strip = { overview, width, extentS, columns: overviewColumns(source, width) };
    return strip.columns;
  };

  const wash = (context: CanvasRenderingContext2D, span: Span | null, x: (atS: number) => number, strength: number) => {
    if (!span) return;
    const from = Math.max(layout.left, x(span.fromS));
    const to = Math.min(layout.left + layout.across, x(span.toS));
    if (to <= from) return;
    context.globalAlpha = strength;
    context.fillStyle = palette.wash;
    context.fillRect(from, layout.marks.top, to - from, layout.times.top - layout.marks.top);
    context.globalAlpha = 1;
    context.fillStyle = palette.near;
    for (const edge of [x(span.fromS), x(span.toS)]) {
      if (edge >= layout.left && edge <= layout.left + layout.across) context.fillRect(Math.round(edge), layout.marks.top, 1, layout.times.top - layout.marks.top);
    }
  };

  const ruleTimes = (context: CanvasRenderingContext2D, x: (atS: number) => number) => {
    const { extent } = view;
    context.font = font(11, 500);
    context.textBaseline = 'middle';
    context.textAlign = 'center';
    for (const line of timeLines(view.span, layout.across)) {
      if (line.atS > extent.toS + 1e-9) break;
      const at = Math.round(x(line.atS));
      context.fillStyle = palette.rule;
      context.globalAlpha = line.label === null ? 0.4 : 1;
      context.fillRect(at, layout.strings.top - 4, 1, layout.times.top - layout.strings.top + 4);
      context.globalAlpha = 1;
      if (line.label === null) continue;
      context.fillStyle = palette.inkFaint;
      const half = context.measureText(line.label).width / 2;
      context.fillText(line.label, Math.max(layout.left + half - 4, Math.min(layout.left + layout.across - half + 8, at)), layout.times.top + 11);
    }
  };

  const paintAbove = () => {
    const context = begin(ports.above);
    if (!context) return;
    const { span } = view;
    const x = (atS: number) => xOf(layout, span, atS);
    drawOthers(context, others, x, layout, palette);
    if (hoverX !== null && !held) drawHover(context, hoverX, timeAt(layout, span, hoverX), lengthOf(span) > 20 ? 1 : lengthOf(span) > 2 ? 2 : 3, layout, palette);
    drawReadingLine(context, x(clock.atS), layout, palette, held);
    source.momentAt(clock.atS, moment);
    drawTensionValues(context, moment, source.channels.tensions, content.limits, layout, palette);
    drawRibbonValues(context, content.ribbons, content.ribbons.map((ribbon) => ribbonAt(ribbon, pieces, clock.atS, moment.known, ports.live ? LOOK_BACK : 0)), layout, palette);
    if (ports.live) return;
    // On the strip, where the line stands in the whole.
    const extent = source.extent();
    const share = lengthOf(extent) > 0 ? (clock.atS - extent.fromS) / lengthOf(extent) : 0;
    context.fillStyle = palette.ink;
    context.fillRect(Math.round(layout.left + share * layout.across) - 0.5, layout.overview.top - 1, 1.5, layout.overview.height + 2);
  };

  const stops = [
    clock.onMoment(() => ask({ above: true })),
    view.onChange(() => ask({ below: true })),
    source.onChange(() => ask({ below: true })),
  ];
  void document.fonts.ready.then(() => ask({ below: true }));

  return {
    setContent(next) {
      const again = next.ribbons.length !== content.ribbons.length;
      content = next;
      if (again) place();
      ask({ below: true });
    },
    setPalette(next) {
      palette = next;
      ask({ below: true });
    },
    setOthers(next) {
      others = next;
      ask({ above: true });
    },
    setSize(width, height, nextDensity) {
      if (width === size.width && height === size.height && nextDensity === density) return;
      size = { width, height };
      density = nextDensity;
      place();
      ask({ below: true });
    },
    setHover(next) {
      if (next === hoverX) return;
      hoverX = next;
      ask({ above: true });
    },
    setHeld(next) {
      held = next;
      ask({ above: true });
    },
    layout: () => layout,
    marks: () => marks,
    slips: () => slips,
    cost: () => cost,
    close() {
      if (frame !== null) cancelAnimationFrame(frame);
      for (const stop of stops) stop();
    },
  };
}

/** Samples. */
const LOOK_BACK = 8;

/** Value of a ribbon at the reading line, from what is drawn. */
function ribbonAt(ribbon: Ribbon, pieces: readonly Piece[], atS: number, known: string, lookBack: number): number {
  if (known === 'gap' || known === 'outside') return Number.NaN;
  const piece = pieces.find(({ span }) => atS >= span.fromS && atS < span.toS);
  if (!piece) return Number.NaN;
  const index = indexAt(piece.stretch.startsS, atS);
  if (index < 0) return Number.NaN;
  const series = ribbon.series(piece.stretch);
  // Measures over a window of time have no value at the very end of a running trial: the last one they have stands in.
  for (let i = index; i >= Math.max(0, index - lookBack); i -= 1) {
    const value = series.mean[series.offset + i] ?? Number.NaN;
    if (Number.isFinite(value)) return value;
  }
  return Number.NaN;
}

/** Draws the strings: body by tension, sag where slack, capped bar where saturated, hatch where nothing was measured. */
import type { Palette } from '../palette';
import type { Gap, Piece } from '../source';
import { lengthOf, type Span } from '../span';
import type { Columns } from './columns';
import { hatch } from './hatch';
import { halfThickness, runsOf, sagDepth, sagShape, shownRuns, type Run, type TensionLimits } from './string-runs';

export interface StringPlace {
  readonly left: number;
  /** CSS px from top. */
  readonly middle: number;
  readonly row: number;
  /** Columns a CSS px. */
  readonly density: number;
}

/** Short runs are shown at least so wide, CSS px. */
const LEAST_WIDTH = { slack: 9, saturated: 6, near: 3 };

export function drawString(context: CanvasRenderingContext2D, columns: Columns, limits: TensionLimits, place: StringPlace, palette: Palette, known: (column: number) => 'loading' | 'unmeasured' | 'gap'): void {
  const { density } = place;
  const width = columns.min.length;
  const least = { slack: LEAST_WIDTH.slack * density, saturated: LEAST_WIDTH.saturated * density, near: LEAST_WIDTH.near * density };
  for (const run of shownRuns(runsOf(columns, limits), width, least)) {
    const edges = { x0: place.left + run.from / density, x1: place.left + run.to / density, openLeft: run.from === 0, openRight: run.to === width };
    switch (run.state) {
      case 'taut':
      case 'near':
        drawBody(context, columns, run, limits, place, palette);
        break;
      case 'slack':
        drawSag(context, edges, place, palette);
        break;
      case 'saturated':
        drawBar(context, edges, limits, place, palette);
        break;
      case 'missing':
        drawMissing(context, edges, place, palette, known(Math.floor((run.from + run.to) / 2)));
        break;
    }
  }
}

interface Edges {
  readonly x0: number;
  readonly x1: number;
  /** The run goes on beyond the page. */
  readonly openLeft: boolean;
  readonly openRight: boolean;
}

/**
 * The halo reaches to the highest tension of each pixel, the core to the lowest. Close up both are the same line; from
 * afar they part into the band. So one way of drawing serves every zoom and nothing jumps.
 */
function drawBody(context: CanvasRenderingContext2D, columns: Columns, run: Run, limits: TensionLimits, place: StringPlace, palette: Palette): void {
  const outline = (values: Float32Array) => {
    const half = (column: number) => halfThickness(values[column] ?? 0, limits.tensionMax, place.row);
    const x = (column: number) => place.left + (column + 0.5) / place.density;
    const edge = 0.5 / place.density;
    context.beginPath();
    context.moveTo(x(run.from) - edge, place.middle - half(run.from));
    for (let column = run.from; column < run.to; column += 1) context.lineTo(x(column), place.middle - half(column));
    context.lineTo(x(run.to - 1) + edge, place.middle - half(run.to - 1));
    context.lineTo(x(run.to - 1) + edge, place.middle + half(run.to - 1));
    for (let column = run.to - 1; column >= run.from; column -= 1) context.lineTo(x(column), place.middle + half(column));
    context.lineTo(x(run.from) - edge, place.middle + half(run.from));
    context.closePath();
  };
  context.fillStyle = run.state === 'near' ? palette.near : palette.string;
  context.globalAlpha = run.state === 'near' ? 1 : 0.42;
  outline(columns.max);
  context.fill();
  context.globalAlpha = 1;
  if (run.state === 'near') {
    // Amber alone would be a colour alone: an ink edge above and below says "nearly".
    context.strokeStyle = palette.ink;
    context.lineWidth = 1;
    context.stroke();
    return;
  }
  outline(columns.min);
  context.fill();
}

function drawSag(context: CanvasRenderingContext2D, { x0, x1, openLeft, openRight }: Edges, place: StringPlace, palette: Palette): void {
  const width = x1 - x0;
  const depth = sagDepth(width, place.row);
  const steps = Math.max(8, Math.min(96, Math.ceil(width / 3)));
  // Where a slack goes on beyond the page, its end is not on it: it hangs level there.
  const share = (s: number) => (openLeft && openRight ? 0.5 : openLeft ? 0.5 + s / 2 : openRight ? s / 2 : s);
  context.beginPath();
  for (let i = 0; i <= steps; i += 1) {
    const s = i / steps;
    const y = place.middle + depth * sagShape(share(s), width);
    if (i === 0) context.moveTo(x0, y);
    else context.lineTo(x0 + s * width, y);
  }
  context.strokeStyle = palette.slack;
  context.lineWidth = 2;
  context.setLineDash(width < 24 ? [2.5, 2] : [5, 3.5]);
  context.stroke();
  context.setLineDash([]);
}

function drawBar(context: CanvasRenderingContext2D, { x0, x1, openLeft, openRight }: Edges, limits: TensionLimits, place: StringPlace, palette: Palette): void {
  const half = halfThickness(limits.tensionMax, limits.tensionMax, place.row);
  const cap = Math.min(place.row * 0.42, half + 3);
  context.fillStyle = palette.saturated;
  context.fillRect(x0, place.middle - half, x1 - x0, 2 * half);
  if (!openLeft) context.fillRect(x0 - 0.5, place.middle - cap, 2, 2 * cap);
  if (!openRight) context.fillRect(x1 - 1.5, place.middle - cap, 2, 2 * cap);
}

function drawMissing(context: CanvasRenderingContext2D, { x0, x1 }: Edges, place: StringPlace, palette: Palette, why: 'loading' | 'unmeasured' | 'gap'): void {
  if (why === 'gap') return;
  if (why === 'loading') {
    context.fillStyle = palette.rule;
    context.fillRect(x0, place.middle - 0.5, x1 - x0, 1);
    return;
  }
  hatch(context, x0, place.middle - place.row * 0.3, x1 - x0, place.row * 0.6, palette.gap);
}

/** Tells why a column of the page is empty. */
export function emptyBecause(pieces: readonly Piece[], gaps: readonly Gap[], view: Span, width: number): (column: number) => 'loading' | 'unmeasured' | 'gap' {
  return (column) => {
    const atS = view.fromS + ((column + 0.5) / width) * lengthOf(view);
    if (gaps.some((gap) => atS >= gap.startS && atS <= gap.endS)) return 'gap';
    return pieces.some(({ span }) => atS >= span.fromS && atS < span.toS) ? 'unmeasured' : 'loading';
  };
}

/** Hatches the gaps across all strings. A gap is never thinner than three pixels. */
export function drawGaps(context: CanvasRenderingContext2D, gaps: readonly Gap[], xOf: (atS: number) => number, top: number, height: number, clip: { left: number; right: number }, palette: Palette): void {
  for (const gap of gaps) {
    const [a, b] = [xOf(gap.startS), xOf(gap.endS)];
    const grow = Math.max(0, 3 - (b - a)) / 2;
    const x0 = Math.max(clip.left, a - grow);
    const x1 = Math.min(clip.right, b + grow);
    if (x1 <= x0) continue;
    context.fillStyle = palette.paper;
    context.fillRect(x0, top, x1 - x0, height);
    hatch(context, x0, top, x1 - x0, height, palette.gap);
  }
}

/** Draws one ribbon: a line over a ruled base, with its min-max band from afar. */
import type { Palette } from '../palette';
import type { Columns } from '../stave/columns';
import type { Lane } from '../stave/page-layout';

export interface RibbonScale {
  /** Shown at the bottom and the top of the lane, SI. */
  readonly low: number;
  readonly high: number;
}

/** Ends of a ribbon: its own where it has them, otherwise the next round value above what there is. */
export function ribbonScale(fixed: { low: number | null; high: number | null }, largest: number): RibbonScale {
  const low = fixed.low ?? 0;
  const high = fixed.high ?? roundAbove(Math.max(largest, 1e-6));
  return high > low ? { low, high } : { low, high: low + 1 };
}

/** 1, 2 or 5 times a power of ten. */
export function roundAbove(value: number): number {
  const power = 10 ** Math.floor(Math.log10(value));
  const step = [1, 2, 5, 10].find((factor) => factor * power >= value * 0.999);
  return (step ?? 10) * power;
}

export function drawRibbon(context: CanvasRenderingContext2D, columns: Columns, lane: Lane, left: number, density: number, scale: RibbonScale, palette: Palette): void {
  const width = columns.mean.length;
  const room = lane.height - 9;
  const base = lane.top + lane.height - 4;
  const y = (value: number) => base - Math.min(1.04, Math.max(0, (value - scale.low) / (scale.high - scale.low))) * room;
  context.fillStyle = palette.rule;
  context.fillRect(left, base, width / density, 1);

  context.fillStyle = palette.ink;
  context.globalAlpha = 0.16;
  for (let column = 0; column < width; column += 1) {
    const [low, high] = [columns.min[column] ?? Number.NaN, columns.max[column] ?? Number.NaN];
    if (high - low > 0) context.fillRect(left + column / density, y(high), 1 / density, Math.max(0, y(low) - y(high)));
  }
  context.globalAlpha = 1;

  context.beginPath();
  let joined = false;
  for (let column = 0; column < width; column += 1) {
    const value = columns.mean[column] ?? Number.NaN;
    if (value !== value) {
      joined = false;
      continue;
    }
    const x = left + (column + 0.5) / density;
    if (joined) context.lineTo(x, y(value));
    else context.moveTo(x, y(value));
    joined = true;
  }
  context.strokeStyle = palette.ink;
  context.lineWidth = 1.25;
  context.lineJoin = 'round';
  context.stroke();
}

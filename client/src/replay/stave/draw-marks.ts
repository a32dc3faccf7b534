/** Draws the flags' marks above the strings, with cable numbers, and faint threads down to their cables. */
import type { Flag } from '@shared/api/sessions';
import type { Palette } from '../palette';
import { flagShapes } from './flag-shapes';
import { layOutMarks, MARK_HALF, type PlacedMark } from './mark-layout';
import { font } from './page-font';
import type { PageLayout } from './page-layout';

export type MarkedFlag = Pick<Flag, 'kind' | 'cable' | 'startS' | 'endS' | 'peak'> & { readonly id: string };

export interface DrawnMark extends PlacedMark {
  readonly flags: readonly MarkedFlag[];
  readonly y: number;
}

/** Lays out the marks of the flags in sight. A flag that lasts longer than the page keeps its mark at the page's edge. */
export function placeMarks(flags: readonly MarkedFlag[], layout: PageLayout, xOf: (atS: number) => number): DrawnMark[] {
  const right = layout.left + layout.across;
  const byId = new Map(flags.map((flag) => [flag.id, flag]));
  const inSight = flags
    .filter((flag) => xOf(flag.endS) >= layout.left && xOf(flag.startS) <= right)
    .map((flag) => ({ id: flag.id, x: Math.max(layout.left + MARK_HALF, Math.min(right - MARK_HALF, xOf(flag.startS))), width: flag.cable === null ? 14 : flag.cable > 9 ? 29 : 22 }))
    .sort((a, b) => a.x - b.x);
  return layOutMarks(inSight, layout.marks.lines).map((mark) => ({
    ...mark,
    flags: mark.ids.map((id) => byId.get(id)).filter((flag) => flag !== undefined),
    y: layout.marks.top + layout.marks.height - (mark.line + 0.5) * layout.marks.lineHeight - 1,
  }));
}

const paths = new Map<string, Path2D>();
function pathOf(data: string): Path2D {
  const known = paths.get(data);
  if (known) return known;
  const path = new Path2D(data);
  paths.set(data, path);
  return path;
}

export function drawMarks(context: CanvasRenderingContext2D, marks: readonly DrawnMark[], palette: Palette, litId: string | null): void {
  context.font = font(11, 600);
  context.textBaseline = 'middle';
  context.textAlign = 'left';
  for (const mark of marks) {
    const flag = mark.flags[0];
    if (!flag) continue;
    const lit = mark.ids.some((id) => id === litId);
    if (lit) {
      context.fillStyle = palette.wash;
      context.fillRect(mark.x - MARK_HALF - 3, mark.y - 8, 28, 16);
    }
    drawShape(context, flag.kind, mark.x, mark.y, palette);
    context.fillStyle = lit ? palette.ink : palette.inkFaint;
    const label = mark.flags.length > 1 ? `×${mark.flags.length}` : flag.cable === null ? '' : String(flag.cable);
    context.fillText(label, mark.x + MARK_HALF + 3, mark.y + 0.5);
  }
}

/** One kind's shape with its middle at a point. */
export function drawShape(context: CanvasRenderingContext2D, kind: MarkedFlag['kind'], x: number, y: number, palette: Palette): void {
  const shape = flagShapes[kind];
  context.save();
  context.translate(x, y);
  if (shape.filled) {
    context.fillStyle = palette[shape.role];
    context.fill(pathOf(shape.path));
  } else {
    context.strokeStyle = palette[shape.role];
    context.lineWidth = 1.8;
    context.lineCap = 'round';
    context.lineJoin = 'round';
    context.stroke(pathOf(shape.path));
  }
  context.restore();
}

/** Draws the notes as slips of paper that hang by a thread from their moment, or from a bracket over their span. */
import type { Palette } from '../palette';
import { font } from './page-font';
import type { PageLayout } from './page-layout';
import { layOutSlips, SLIP_MOST, type PlacedSlip } from './slip-layout';

export interface NoteSlip {
  readonly id: string;
  readonly startS: number;
  readonly endS: number | null;
  readonly cables: readonly number[];
  readonly initials: string;
  readonly text: string;
  readonly resolved: boolean;
}

export interface DrawnSlip extends PlacedSlip {
  readonly notes: readonly NoteSlip[];
  readonly top: number;
  readonly height: number;
}

const PAD = 6;

export function placeSlips(context: CanvasRenderingContext2D, notes: readonly NoteSlip[], layout: PageLayout, xOf: (atS: number) => number): DrawnSlip[] {
  if (layout.slips.lines === 0) return [];
  context.font = font(11, 600);
  const right = layout.left + layout.across;
  const byId = new Map(notes.map((note) => [note.id, note]));
  const inSight = notes
    .filter((note) => xOf(note.endS ?? note.startS) >= layout.left && xOf(note.startS) <= right)
    .map((note) => ({ id: note.id, x: Math.max(layout.left, xOf(note.startS)) - layout.left, fullWidth: Math.min(SLIP_MOST, context.measureText(lineOf(note)).width + 2 * PAD + 2) }))
    .sort((a, b) => a.x - b.x);
  return layOutSlips(inSight, layout.slips.lines, layout.across).map((slip) => ({
    ...slip,
    x: slip.x + layout.left,
    left: slip.left + layout.left,
    notes: slip.ids.map((id) => byId.get(id)).filter((note) => note !== undefined),
    top: layout.slips.top + 8 + slip.line * layout.slips.lineHeight,
    height: layout.slips.lineHeight - 3,
  }));
}

const lineOf = (note: NoteSlip): string => `${note.initials}  ${note.text.split('\n')[0] ?? ''}`;

export function drawSlips(context: CanvasRenderingContext2D, slips: readonly DrawnSlip[], layout: PageLayout, xOf: (atS: number) => number, palette: Palette, litId: string | null): void {
  const from = layout.slips.top;
  for (const slip of slips) {
    for (const note of slip.notes) drawTie(context, note, from, slip.top, layout, xOf, palette, note.id === litId);
  }
  for (const slip of slips) {
    const lit = slip.ids.some((id) => id === litId);
    const first = slip.notes[0];
    if (!first) continue;
    context.fillStyle = lit ? palette.wash : palette.sheet;
    context.strokeStyle = lit ? palette.ink : palette.inkFaint;
    context.lineWidth = 1;
    paper(context, slip.left, slip.top, slip.width, slip.height);
    context.fill();
    context.stroke();
    context.save();
    context.beginPath();
    context.rect(slip.left, slip.top, slip.width - 3, slip.height);
    context.clip();
    context.textBaseline = 'middle';
    context.textAlign = 'left';
    const y = slip.top + slip.height / 2 + 0.5;
    context.font = font(11, 700);
    context.fillStyle = first.resolved ? palette.inkFaint : palette.ink;
    const head = slip.notes.length > 1 ? `${slip.notes.length} notes` : first.initials;
    context.fillText(head, slip.left + PAD, y);
    if (slip.notes.length === 1) {
      const offset = context.measureText(head).width + 6;
      context.font = font(11, 500);
      context.fillStyle = first.resolved ? palette.inkFaint : palette.inkSoft;
      context.fillText(shortened(context, first.text.split('\n')[0] ?? '', slip.width - PAD * 2 - offset), slip.left + PAD + offset, y);
    }
    context.restore();
  }
}

/** A slip's lower right corner is turned up: paper, not a button. */
function paper(context: CanvasRenderingContext2D, x: number, y: number, width: number, height: number): void {
  context.beginPath();
  context.moveTo(x + 0.5, y + 0.5);
  context.lineTo(x + width - 0.5, y + 0.5);
  context.lineTo(x + width - 0.5, y + height - 5.5);
  context.lineTo(x + width - 5.5, y + height - 0.5);
  context.lineTo(x + 0.5, y + height - 0.5);
  context.closePath();
}

/** Thread of a point; bracket and thread of a span. Cables that the note names get a knot on their string. */
function drawTie(context: CanvasRenderingContext2D, note: NoteSlip, from: number, to: number, layout: PageLayout, xOf: (atS: number) => number, palette: Palette, lit: boolean): void {
  const right = layout.left + layout.across;
  const x = Math.max(layout.left, xOf(note.startS));
  context.strokeStyle = lit ? palette.ink : palette.inkFaint;
  context.lineWidth = lit ? 1.5 : 1;
  context.beginPath();
  if (note.endS !== null) {
    const x1 = Math.min(right, xOf(note.endS));
    context.moveTo(x, from - 1);
    context.lineTo(x, from + 3);
    context.lineTo(x1, from + 3);
    context.lineTo(x1, from - 1);
    context.moveTo(x + 0.5, from + 3);
  } else {
    context.moveTo(x + 0.5, from - 2);
  }
  context.lineTo(x + 0.5, to);
  context.stroke();
  context.fillStyle = palette.paper;
  for (const cable of note.cables) {
    context.beginPath();
    context.arc(x + 0.5, layout.strings.top + (cable - 0.5) * layout.strings.row, 3, 0, 2 * Math.PI);
    context.fill();
    context.stroke();
  }
}

function shortened(context: CanvasRenderingContext2D, text: string, width: number): string {
  if (width < 14) return '';
  if (context.measureText(text).width <= width) return text;
  let low = 0;
  let high = text.length;
  while (low < high) {
    const middle = (low + high + 1) >> 1;
    if (context.measureText(`${text.slice(0, middle)}…`).width <= width) low = middle;
    else high = middle - 1;
  }
  return low > 0 ? `${text.slice(0, low).trimEnd()}…` : '';
}

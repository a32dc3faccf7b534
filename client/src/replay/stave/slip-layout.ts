/**
 * Where the notes' slips hang below the strings. A slip hangs at its moment, as wide as its neighbours leave room: the
 * text when there is plenty, the initials when there is little, a bundle with a count when there is none.
 */
export interface SlipInput {
  readonly id: string;
  /** Where its thread is tied, CSS px. */
  readonly x: number;
  /** Width that shows the whole first line. */
  readonly fullWidth: number;
}

export interface PlacedSlip {
  readonly ids: readonly string[];
  readonly x: number;
  /** Left edge and width of the paper. */
  readonly left: number;
  readonly width: number;
  /** 0 is nearest to the strings. */
  readonly line: number;
}

/** Initials on a slip, CSS px. */
export const SLIP_LEAST = 34;
export const SLIP_MOST = 220;
const APART = 4;

interface Slot {
  ids: string[];
  x: number;
  left: number;
  line: number;
}

/**
 * @param slips in order of x
 * @param width of the page: a slip at the right edge moves left to stay on it
 */
export function layOutSlips(slips: readonly SlipInput[], lines: number, width: number): PlacedSlip[] {
  const full = new Map(slips.map((slip) => [slip.id, slip.fullWidth]));
  const rows: Slot[][] = Array.from({ length: lines }, () => []);
  for (const slip of slips) {
    const left = Math.max(0, Math.min(slip.x - 4, width - SLIP_LEAST));
    const wanted = Math.min(SLIP_MOST, slip.fullWidth);
    // The line where it leaves the slip before it the most of its own width.
    const room = rows.map((row) => {
      const last = row.at(-1);
      return last ? left - last.left - APART : Infinity;
    });
    const free = room.findIndex((space, line) => space >= Math.min(SLIP_MOST, full.get(rows[line]?.at(-1)?.ids[0] ?? '') ?? wanted));
    const line = free >= 0 ? free : room.indexOf(Math.max(...room));
    const row = rows[line];
    if (!row) continue;
    const last = row.at(-1);
    if (last && left - last.left < SLIP_LEAST + APART) last.ids.push(slip.id);
    else row.push({ ids: [slip.id], x: slip.x, left, line });
  }
  return rows.flatMap((row) =>
    row.map((slot, i) => {
      const next = row[i + 1];
      const room = (next ? next.left - APART : width) - slot.left;
      const wanted = slot.ids.length > 1 ? SLIP_LEAST + 10 : Math.min(SLIP_MOST, full.get(slot.ids[0] ?? '') ?? SLIP_LEAST);
      return { ids: slot.ids, x: slot.x, left: slot.left, line: slot.line, width: Math.max(SLIP_LEAST, Math.min(room, wanted)) };
    }),
  );
}

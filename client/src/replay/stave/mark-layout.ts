/**
 * Where the flags' marks stand above the strings. A mark keeps to its moment; when two would touch, the second goes one
 * line up; when there is no line left they become one pile that says how many it holds.
 */
export interface MarkInput {
  readonly id: string;
  readonly x: number;
  /** Width with its cable number, CSS px. */
  readonly width: number;
}

export interface PlacedMark {
  /** Those in the pile; one for a mark that stands alone. */
  readonly ids: readonly string[];
  /** Middle of the mark's shape. */
  readonly x: number;
  /** 0 is nearest to the strings. */
  readonly line: number;
}

interface Slot {
  ids: string[];
  x: number;
  line: number;
  right: number;
}

/** Room between two marks, CSS px. */
const APART = 3;
/** A mark's shape reaches this far to the left of its moment. */
export const MARK_HALF = 6;

/**
 * @param marks in order of x
 * @param lines how many lines there are above the strings
 */
export function layOutMarks(marks: readonly MarkInput[], lines: number, pileWidth = 24): PlacedMark[] {
  const placed: Slot[] = [];
  const lastOfLine: (Slot | undefined)[] = Array.from({ length: lines });
  for (const mark of marks) {
    const left = mark.x - MARK_HALF;
    const line = lastOfLine.findIndex((slot) => slot === undefined || slot.right + APART <= left);
    if (line >= 0) {
      const slot: Slot = { ids: [mark.id], x: mark.x, line, right: left + mark.width };
      placed.push(slot);
      lastOfLine[line] = slot;
      continue;
    }
    // No line is free: onto the pile of the line whose last mark is nearest.
    const nearest = lastOfLine.reduce((best, slot) => (slot && (!best || slot.x > best.x) ? slot : best), undefined);
    if (!nearest) continue;
    nearest.ids.push(mark.id);
    nearest.right = Math.max(nearest.right, nearest.x - MARK_HALF + pileWidth);
  }
  return placed.map(({ ids, x, line }) => ({ ids, x, line }));
}

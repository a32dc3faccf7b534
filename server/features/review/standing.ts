/** Which verdict on a flag holds: the newest, where taking back uncovers the one before. */
import type { VerdictRow } from './queries';

/**
 * @param rows verdicts on one flag, oldest first
 * @returns null when nobody judged it, or everybody took theirs back
 */
export function standingVerdict<Row extends Pick<VerdictRow, 'authorId' | 'value'>>(rows: readonly Row[]): Row | null {
  const standing: Row[] = [];
  for (const row of rows) {
    if (row.value !== 'withdrawn') standing.push(row);
    else {
      const taken = standing.findLastIndex((before) => before.authorId === row.authorId);
      if (taken >= 0) standing.splice(taken, 1);
    }
  }
  return standing.at(-1) ?? null;
}

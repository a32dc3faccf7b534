/** An expected failure of a request: a code for programs, a plain sentence and a way out for people. */
import type { FaultPoint } from '@shared/api/common';

export class Refusal extends Error {
  override readonly name = 'Refusal';

  constructor(
    readonly code: string,
    readonly status: number,
    sentence: string,
    readonly wayOut: string,
    readonly faults?: readonly FaultPoint[],
  ) {
    super(sentence);
  }
}

interface RefusalEntry {
  readonly status: 400 | 401 | 403 | 404 | 409 | 410 | 413 | 415 | 422 | 429 | 503;
  /** May hold `{name}` places that are filled when it is thrown. */
  readonly sentence: string;
  readonly wayOut: string;
}

const fill = (text: string, values: Record<string, string | number>) =>
  text.replace(/\{(\w+)\}/g, (place, name: string) => String(values[name] ?? place));

/**
 * The table of codes with which one feature refuses, as a function that makes the refusal to throw.
 *
 * Codes are public: never renamed, never reused.
 */
export function defineRefusals<const Table extends Record<string, RefusalEntry>>(table: Table) {
  return (code: keyof Table & string, values: Record<string, string | number> = {}, faults?: readonly FaultPoint[]): Refusal => {
    const entry = table[code] as RefusalEntry;
    return new Refusal(code, entry.status, fill(entry.sentence, values), fill(entry.wayOut, values), faults);
  };
}

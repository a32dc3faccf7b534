/**
 * How the entries of a session's log hang together: each hash covers its entry and the hash before it, so that no entry
 * can be changed, left out or put between without every later hash being wrong.
 *
 * Hash = SHA-256, hex, over the canonical JSON (RFC 8785) of
 * `{ "at", "detail", "n", "previous", "session", "what", "who" }`; `at` in ISO 8601 with milliseconds in UTC,
 * `previous` the empty string for entry 0.
 */
import { createHash } from 'node:crypto';
import { canonicalJson, type Json } from '@shared/trust';

export interface ChainEntry {
  n: number;
  at: Date;
  who: string;
  what: string;
  detail: Record<string, unknown>;
}

export function hashOfEntry(sessionId: string, entry: ChainEntry, previous: string): string {
  const covered = { session: sessionId, previous, n: entry.n, at: entry.at.toISOString(), who: entry.who, what: entry.what, detail: entry.detail as { [name: string]: Json } };
  return createHash('sha256').update(canonicalJson(covered)).digest('hex');
}

/** True when the entries are numbered from 0 without holes and every hash can be made again. */
export function chainHolds(sessionId: string, entries: readonly (ChainEntry & { hash: string })[]): boolean {
  let previous = '';
  return entries.every((entry, i) => {
    const right = entry.n === i && entry.hash === hashOfEntry(sessionId, entry, previous);
    previous = entry.hash;
    return right;
  });
}

import { asc, desc, eq } from 'drizzle-orm';
import type { Database } from '../../db/engine';
import { logEntries, sessions } from '../../db/schema';
import { type ChainEntry, hashOfEntry } from './log-chain';

export const logOf = (db: Database, sessionId: string) => db.select().from(logEntries).where(eq(logEntries.sessionId, sessionId)).orderBy(asc(logEntries.n));

/** Adds an entry; the session is held until the transaction ends, so that entries follow one another. */
export async function appendLog(tx: Database, sessionId: string, entry: Omit<ChainEntry, 'n'>): Promise<void> {
  await tx.select({ id: sessions.id }).from(sessions).where(eq(sessions.id, sessionId)).for('update');
  const [last] = await tx.select({ n: logEntries.n, hash: logEntries.hash }).from(logEntries).where(eq(logEntries.sessionId, sessionId)).orderBy(desc(logEntries.n)).limit(1);
  const next = { ...entry, n: last ? last.n + 1 : 0 };
  await tx.insert(logEntries).values({ sessionId, ...next, hash: hashOfEntry(sessionId, next, last?.hash ?? '') });
}

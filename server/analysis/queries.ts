import { and, asc, desc, eq, isNull } from 'drizzle-orm';
import { v7 } from 'uuid';
import type { Flag } from '@shared/flags';
import type { Database } from '../db/engine';
import { flags, recordings, rigRevisions, ruleRevisions, sessions, trials } from '../db/schema';

/** Closed recordings of trials that nobody looked through yet, oldest first. */
export const waitingRecordings = (db: Database) =>
  db.select({ id: recordings.id }).from(recordings).where(and(eq(recordings.state, 'closed'), isNull(recordings.flagsFoundAt))).orderBy(asc(recordings.id));

export async function recordingToSearch(db: Database, id: string) {
  const [row] = await db.select({
    id: recordings.id, trialId: recordings.trialId, channels: recordings.channels, rateHz: recordings.rateHz, rig: rigRevisions.file, studyId: sessions.studyId,
  }).from(recordings)
    .innerJoin(rigRevisions, eq(rigRevisions.id, recordings.rigRevisionId))
    .leftJoin(trials, eq(trials.id, recordings.trialId))
    .leftJoin(sessions, eq(sessions.id, trials.sessionId))
    .where(and(eq(recordings.id, id), eq(recordings.state, 'closed'), isNull(recordings.flagsFoundAt)));
  return row ?? null;
}

/** The study's newest rule revision; null: it keeps the default rules of the rig. */
export async function newestRules(db: Database, studyId: string) {
  const [row] = await db.select({ id: ruleRevisions.id, rules: ruleRevisions.rules }).from(ruleRevisions)
    .where(eq(ruleRevisions.studyId, studyId)).orderBy(desc(ruleRevisions.revision)).limit(1);
  return row ?? null;
}

/** Writes all flags of a recording, once. */
export async function storeFlags(db: Database, recordingId: string, ruleRevisionId: string | null, found: readonly Flag[], at: Date): Promise<void> {
  await db.transaction(async (tx) => {
    const [marked] = await tx.update(recordings).set({ flagsFoundAt: at }).where(and(eq(recordings.id, recordingId), isNull(recordings.flagsFoundAt))).returning({ id: recordings.id });
    if (!marked || found.length === 0) return;
    await tx.insert(flags).values(found.map(({ kind, cable, startS, endS, peak, peakS, severity, evidence }) => ({
      id: v7(), recordingId, ruleRevisionId, kind, cable: cable ?? null, startS, endS, peak: peak ?? null, peakS: peakS ?? null, severity: severity ?? null, evidence: evidence ?? null,
    })));
  });
}

import { desc, eq } from 'drizzle-orm';
import type { Database } from '../../db/engine';
import { recordings, sessions, trials } from '../../db/schema';

const columns = { id: recordings.id, state: recordings.state, rateHz: recordings.rateHz, channels: recordings.channels, digest: recordings.digest, decimals: recordings.decimals };

export async function findRecording(db: Database, id: string) {
  const [row] = await db.select(columns).from(recordings).where(eq(recordings.id, id));
  return row ?? null;
}

/** The newest recording of a trial, and what a file of it is called by. */
export async function findRecordingOfTrial(db: Database, trialId: string) {
  const [row] = await db.select({ ...columns, number: trials.number, visit: sessions.visit }).from(recordings)
    .innerJoin(trials, eq(trials.id, recordings.trialId)).innerJoin(sessions, eq(sessions.id, trials.sessionId))
    .where(eq(recordings.trialId, trialId)).orderBy(desc(recordings.startedAt), desc(recordings.id)).limit(1);
  return row ?? null;
}

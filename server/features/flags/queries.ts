import { and, asc, desc, eq, isNull } from 'drizzle-orm';
import type { Database } from '../../db/engine';
import { flags, recordings, shortCause } from '../../db/schema';

/** The newest recording of a trial: whether it is whole, and whether it was looked through. */
export async function findSearchState(db: Database, trialId: string) {
  const [row] = await db.select({ id: recordings.id, state: recordings.state, flagsFoundAt: recordings.flagsFoundAt }).from(recordings)
    .where(eq(recordings.trialId, trialId)).orderBy(desc(recordings.startedAt), desc(recordings.id)).limit(1);
  return row ?? null;
}

export const flagsOf = (db: Database, recordingId: string) => db
  .select({ id: flags.id, kind: flags.kind, cable: flags.cable, startS: flags.startS, endS: flags.endS, peak: flags.peak, severity: flags.severity, cause: shortCause })
  .from(flags).where(and(eq(flags.recordingId, recordingId), isNull(flags.removedAt))).orderBy(asc(flags.startS), asc(flags.kind), asc(flags.cable));

import { and, asc, eq, inArray, isNull } from 'drizzle-orm';
import type { Database } from '../../db/engine';
import { conditions, flags, participants, people, recordings, sessions, shortCause, tasks, trials, verdicts } from '../../db/schema';

export const momentsOf = (db: Database, studyId: string) => db.select({
  id: flags.id, kind: flags.kind, cable: flags.cable, startS: flags.startS, endS: flags.endS, peak: flags.peak, severity: flags.severity, cause: shortCause,
  trialId: trials.id, trialNumber: trials.number, task: tasks.title,
  condition: { id: conditions.id, blindCode: conditions.blindCode, label: conditions.label },
  sessionId: sessions.id, participantCode: participants.code, visit: sessions.visit, plannedAt: sessions.plannedAt,
  recordingId: recordings.id, lastUs: recordings.lastUs, rateHz: recordings.rateHz, channels: recordings.channels, rigRevisionId: recordings.rigRevisionId,
}).from(flags)
  .innerJoin(recordings, eq(recordings.id, flags.recordingId))
  .innerJoin(trials, and(eq(trials.id, recordings.trialId), isNull(trials.removedAt)))
  .innerJoin(sessions, eq(sessions.id, trials.sessionId))
  .innerJoin(participants, eq(participants.id, sessions.participantId))
  .innerJoin(tasks, eq(tasks.id, trials.taskId))
  .innerJoin(conditions, eq(conditions.id, trials.conditionId))
  .where(and(eq(sessions.studyId, studyId), isNull(flags.removedAt)))
  .orderBy(asc(sessions.plannedAt), asc(trials.number), asc(flags.startS), asc(flags.kind), asc(flags.cable));

export type MomentRow = Awaited<ReturnType<typeof momentsOf>>[number];

/** Those of the flags that belong to the study, held until the transaction ends: two judges go one after the other. */
export async function holdFlags(tx: Database, studyId: string, ids: readonly string[]): Promise<{ id: string; trialId: string }[]> {
  await tx.select({ id: flags.id }).from(flags).where(inArray(flags.id, [...ids])).orderBy(asc(flags.id)).for('update');
  return tx.select({ id: flags.id, trialId: trials.id }).from(flags)
    .innerJoin(recordings, eq(recordings.id, flags.recordingId))
    .innerJoin(trials, and(eq(trials.id, recordings.trialId), isNull(trials.removedAt)))
    .innerJoin(sessions, eq(sessions.id, trials.sessionId))
    .where(and(inArray(flags.id, [...ids]), eq(sessions.studyId, studyId), isNull(flags.removedAt)));
}

const verdictColumns = { id: verdicts.id, flagId: verdicts.flagId, authorId: verdicts.authorId, author: people.name, value: verdicts.value, reason: verdicts.reason, at: verdicts.at };

/** Of the flags, every verdict, oldest first. */
export const verdictsOn = (db: Database, flagIds: readonly string[]) => db.select(verdictColumns).from(verdicts)
  .innerJoin(people, eq(people.id, verdicts.authorId)).where(inArray(verdicts.flagId, [...flagIds])).orderBy(asc(verdicts.id));

export type VerdictRow = Awaited<ReturnType<typeof verdictsOn>>[number];

export const verdictsOfStudy = (db: Database, studyId: string) => db.select(verdictColumns).from(verdicts)
  .innerJoin(people, eq(people.id, verdicts.authorId))
  .innerJoin(flags, eq(flags.id, verdicts.flagId)).innerJoin(recordings, eq(recordings.id, flags.recordingId))
  .innerJoin(trials, eq(trials.id, recordings.trialId)).innerJoin(sessions, eq(sessions.id, trials.sessionId))
  .where(eq(sessions.studyId, studyId)).orderBy(asc(verdicts.id));

export const verdictsOfTrial = (db: Database, trialId: string) => db.select(verdictColumns).from(verdicts)
  .innerJoin(people, eq(people.id, verdicts.authorId))
  .innerJoin(flags, eq(flags.id, verdicts.flagId)).innerJoin(recordings, eq(recordings.id, flags.recordingId))
  .where(eq(recordings.trialId, trialId)).orderBy(asc(verdicts.id));

export const insertVerdicts = (tx: Database, rows: readonly (typeof verdicts.$inferInsert)[]) => tx.insert(verdicts).values([...rows]);

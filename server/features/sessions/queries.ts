/** Sessions and trials as they are shown. What changes them is in change-queries.ts. */
import { and, asc, desc, eq, inArray, isNull, lt, or, type SQL, sql } from 'drizzle-orm';
import type { Database } from '../../db/engine';
import { conditions, devices, participants, recordings, rigRevisions, sessions, studies, tasks, trials } from '../../db/schema';

const sessionColumns = {
  id: sessions.id, studyId: sessions.studyId, studyCode: studies.code, studyTitle: studies.title, participantId: sessions.participantId,
  participantCode: participants.code, visit: sessions.visit, state: sessions.state, plannedAt: sessions.plannedAt, rigRevisionId: sessions.rigRevisionId,
  rigTitle: rigRevisions.title, rigRevision: rigRevisions.revision,
  trialsPlanned: sql<number>`(select count(*)::int from trials t where t.session_id = ${sessions.id} and t.removed_at is null)`,
  trialsRecorded: sql<number>`(select count(*)::int from trials t where t.session_id = ${sessions.id} and t.removed_at is null
    and exists (select 1 from recordings r where r.trial_id = t.id))`,
  flags: sql<number>`(select count(*)::int from trials t join recordings r on r.trial_id = t.id join flags f on f.recording_id = r.id and f.removed_at is null
    where t.session_id = ${sessions.id} and t.removed_at is null)`,
};

const sessionRows = (db: Database) => db.select(sessionColumns).from(sessions)
  .innerJoin(studies, eq(studies.id, sessions.studyId))
  .innerJoin(participants, eq(participants.id, sessions.participantId))
  .innerJoin(rigRevisions, eq(rigRevisions.id, sessions.rigRevisionId));

export type SessionRow = Awaited<ReturnType<typeof sessionsOfStudy>>[number];

export const sessionsOfStudy = (db: Database, studyId: string) => sessionRows(db).where(eq(sessions.studyId, studyId)).orderBy(desc(sessions.plannedAt), desc(sessions.id));

export const sessionsById = (db: Database, ids: readonly string[]) => sessionRows(db).where(inArray(sessions.id, [...ids]));

export async function findSession(db: Database, sessionId: string): Promise<SessionRow | null> {
  const [row] = await sessionRows(db).where(eq(sessions.id, sessionId));
  return row ?? null;
}

/** Open ones, and planned ones up to `until`, soonest first. */
export const sessionsToRun = (db: Database, studyIds: readonly string[], until: Date) => sessionRows(db)
  .where(and(inArray(sessions.studyId, [...studyIds]), or(eq(sessions.state, 'open'), and(eq(sessions.state, 'planned'), lt(sessions.plannedAt, until)))))
  .orderBy(asc(sessions.plannedAt)).limit(50);

const trialColumns = {
  id: trials.id, sessionId: trials.sessionId, number: trials.number, state: trials.state, outcome: trials.outcome, outcomeReason: trials.outcomeReason,
  deviceId: trials.deviceId, deviceName: devices.name,
  task: { id: tasks.id, code: tasks.code, title: tasks.title, timeLimitS: tasks.timeLimitS },
  condition: { id: conditions.id, blindCode: conditions.blindCode, label: conditions.label },
  /** Of the newest recording, µs; null when there is none. */
  lastUs: sql<number | null>`(select r.last_us from recordings r where r.trial_id = ${trials.id} order by r.started_at desc limit 1)`,
  flags: sql<number>`(select count(*)::int from recordings r join flags f on f.recording_id = r.id and f.removed_at is null where r.trial_id = ${trials.id})`,
  notes: sql<number>`(select count(*)::int from notes n where n.trial_id = ${trials.id} and n.reply_to is null)`,
};

const trialRows = (db: Database, where: SQL | undefined) => db.select(trialColumns).from(trials)
  .innerJoin(tasks, eq(tasks.id, trials.taskId))
  .innerJoin(conditions, eq(conditions.id, trials.conditionId))
  .leftJoin(devices, eq(devices.id, trials.deviceId))
  .where(and(isNull(trials.removedAt), where));

export type TrialRow = Awaited<ReturnType<typeof trialsOfSession>>[number];

export const trialsOfSession = (db: Database, sessionId: string) => trialRows(db, eq(trials.sessionId, sessionId)).orderBy(asc(trials.number));

export async function findTrial(db: Database, trialId: string): Promise<TrialRow | null> {
  const [row] = await trialRows(db, eq(trials.id, trialId));
  return row ?? null;
}

const inStudies = (db: Database, studyIds: readonly string[]) =>
  inArray(trials.sessionId, db.select({ id: sessions.id }).from(sessions).where(inArray(sessions.studyId, [...studyIds])));

export const trialsToJudge = (db: Database, studyIds: readonly string[]) => trialRows(db, and(eq(trials.state, 'stopped'), inStudies(db, studyIds)))
  .orderBy(desc(trials.id)).limit(50);

/** Trials with a whole recording, latest recorded first. */
export const trialsRecorded = (db: Database, studyIds: readonly string[], limit: number) => trialRows(db, and(inArray(trials.state, ['stopped', 'judged']), inStudies(db, studyIds)))
  .orderBy(desc(sql`(select max(r.started_at) from recordings r where r.trial_id = ${trials.id})`), desc(trials.id)).limit(limit);

export type RecordingRow = typeof recordings.$inferSelect & { deviceName: string | null };

/** The newest recording of a trial. */
export async function findRecordingOfTrial(db: Database, trialId: string): Promise<RecordingRow | null> {
  const [row] = await db.select({ recording: recordings, deviceName: devices.name }).from(recordings)
    .leftJoin(devices, eq(devices.id, recordings.deviceId))
    .where(eq(recordings.trialId, trialId)).orderBy(desc(recordings.startedAt), desc(recordings.id)).limit(1);
  return row ? { ...row.recording, deviceName: row.deviceName } : null;
}

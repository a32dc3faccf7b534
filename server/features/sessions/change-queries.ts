/** What changes sessions and trials. */
import { and, count, eq, inArray, isNull, max } from 'drizzle-orm';
import type { TrialState } from '@shared/api/sessions';
import type { RigFile } from '@shared/rig';
import type { Database } from '../../db/engine';
import { conditions, devices, participants, recordings, rigRevisions, rigs, sessions, studies, tasks, trials } from '../../db/schema';
import { type MoveName, moves, runningStates } from './trial-states';

export interface PlannedTrial {
  taskId: string;
  conditionId: string;
}

export async function stateOfStudy(db: Database, studyId: string) {
  const [row] = await db.select({ state: studies.state }).from(studies).where(eq(studies.id, studyId));
  return row?.state ?? null;
}

export async function participantIsIn(db: Database, studyId: string, participantId: string): Promise<boolean> {
  return (await db.select({ id: participants.id }).from(participants).where(and(eq(participants.id, participantId), eq(participants.studyId, studyId)))).length > 0;
}

export async function rigRevisionExists(db: Database, id: string): Promise<boolean> {
  return (await db.select({ id: rigRevisions.id }).from(rigRevisions).where(eq(rigRevisions.id, id))).length > 0;
}

export async function tasksIn(db: Database, studyId: string): Promise<Set<string>> {
  return new Set((await db.select({ id: tasks.id }).from(tasks).where(eq(tasks.studyId, studyId))).map((row) => row.id));
}

export async function conditionsIn(db: Database, studyId: string): Promise<Set<string>> {
  return new Set((await db.select({ id: conditions.id }).from(conditions).where(eq(conditions.studyId, studyId))).map((row) => row.id));
}

/** The participant is held until the transaction ends, so that two plans do not take the same visit number. */
export async function insertSession(tx: Database, values: { studyId: string; participantId: string; rigRevisionId: string; plannedAt: Date; createdBy: string | null }): Promise<string> {
  await tx.select({ id: participants.id }).from(participants).where(eq(participants.id, values.participantId)).for('update');
  const [last] = await tx.select({ visit: max(sessions.visit) }).from(sessions).where(eq(sessions.participantId, values.participantId));
  const [row] = await tx.insert(sessions).values({ ...values, visit: (last?.visit ?? 0) + 1 }).returning({ id: sessions.id });
  if (!row) throw new Error('The session was not written');
  return row.id;
}

/** Numbers go on after the last one ever given, removed trials included. Hold the session first. */
export async function insertTrials(tx: Database, sessionId: string, planned: readonly PlannedTrial[]): Promise<string[]> {
  if (planned.length === 0) return [];
  const [last] = await tx.select({ number: max(trials.number) }).from(trials).where(eq(trials.sessionId, sessionId));
  const from = (last?.number ?? 0) + 1;
  const rows = await tx.insert(trials).values(planned.map((each, i) => ({ ...each, sessionId, number: from + i }))).returning({ id: trials.id });
  return rows.map((row) => row.id);
}

export interface HeldSession {
  id: string;
  studyId: string;
  state: 'planned' | 'open' | 'closed' | 'signed';
  rigCode: string;
  rigRevision: number;
}

/** Held until the transaction ends: what happens to one session happens one after another. */
export async function holdSession(tx: Database, sessionId: string): Promise<HeldSession | null> {
  const [held] = await tx.select({ id: sessions.id }).from(sessions).where(eq(sessions.id, sessionId)).for('update');
  if (!held) return null;
  const [row] = await tx.select({ id: sessions.id, studyId: sessions.studyId, state: sessions.state, rigCode: rigs.code, rigRevision: rigRevisions.revision }).from(sessions)
    .innerJoin(rigRevisions, eq(rigRevisions.id, sessions.rigRevisionId)).innerJoin(rigs, eq(rigs.id, rigRevisions.rigId)).where(eq(sessions.id, sessionId));
  return row ?? null;
}

export async function rigOfSession(db: Database, sessionId: string): Promise<{ rigRevisionId: string; rig: RigFile }> {
  const [row] = await db.select({ rigRevisionId: rigRevisions.id, rig: rigRevisions.file }).from(sessions).innerJoin(rigRevisions, eq(rigRevisions.id, sessions.rigRevisionId)).where(eq(sessions.id, sessionId));
  if (!row) throw new Error('A session without a rig');
  return row;
}

export async function fileUnderTrial(tx: Database, recordingId: string, trialId: string): Promise<void> {
  await tx.update(recordings).set({ trialId }).where(eq(recordings.id, recordingId));
}

export async function setSessionState(tx: Database, sessionId: string, state: 'open' | 'closed'): Promise<void> {
  await tx.update(sessions).set({ state }).where(eq(sessions.id, sessionId));
}

export interface TrialPlace {
  id: string;
  sessionId: string;
  number: number;
  state: TrialState;
  deviceId: string | null;
}

export async function placeOfTrial(db: Database, trialId: string): Promise<TrialPlace | null> {
  const [row] = await db.select({ id: trials.id, sessionId: trials.sessionId, number: trials.number, state: trials.state, deviceId: trials.deviceId })
    .from(trials).where(and(eq(trials.id, trialId), isNull(trials.removedAt)));
  return row ?? null;
}

/** @returns false when the trial is in no state from which it can move so */
export async function moveTrial(tx: Database, trialId: string, move: MoveName, more: Partial<typeof trials.$inferInsert> = {}): Promise<boolean> {
  const { from, to } = moves[move];
  const rows = await tx.update(trials).set({ ...more, state: to })
    .where(and(eq(trials.id, trialId), inArray(trials.state, [...from]), isNull(trials.removedAt))).returning({ id: trials.id });
  return rows.length > 0;
}

export async function markRemoved(tx: Database, trialId: string, at: Date): Promise<void> {
  await tx.update(trials).set({ removedAt: at }).where(eq(trials.id, trialId));
}

export async function trialsInState(tx: Database, sessionId: string, states: readonly TrialState[]): Promise<number> {
  const [row] = await tx.select({ n: count() }).from(trials).where(and(eq(trials.sessionId, sessionId), inArray(trials.state, [...states]), isNull(trials.removedAt)));
  return row?.n ?? 0;
}

/** A device that is not revoked; held until the transaction ends, so that two trials are not armed on it at once. */
export async function holdDevice(tx: Database, deviceId: string): Promise<{ id: string; name: string } | null> {
  const [row] = await tx.select({ id: devices.id, name: devices.name }).from(devices).where(and(eq(devices.id, deviceId), isNull(devices.revokedAt))).for('update');
  return row ?? null;
}

export async function nameOfDevice(db: Database, deviceId: string): Promise<string> {
  const [row] = await db.select({ name: devices.name }).from(devices).where(eq(devices.id, deviceId));
  return row?.name ?? deviceId;
}

/** The trial that a device holds: armed on it, or being recorded by it. */
export async function trialHeldBy(db: Database, deviceId: string, states: readonly TrialState[] = runningStates): Promise<string | null> {
  const [row] = await db.select({ id: trials.id }).from(trials).where(and(eq(trials.deviceId, deviceId), inArray(trials.state, [...states]), isNull(trials.removedAt))).limit(1);
  return row?.id ?? null;
}

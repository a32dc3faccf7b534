/** What the guard and the sign-in look up. */
import { drizzleAdapter } from 'better-auth/adapters/drizzle';
import { and, eq } from 'drizzle-orm';
import type { PersonId, StudyId } from '@shared/api/common';
import type { Database } from '../db/engine';
import { accounts, auditEntries, members, notes, people, recordings, sessions, settings, signIns, studies, trials, verifications } from '../db/schema';
import type { Via } from './guards';
import type { Membership } from './person';

/** The study that a thing belongs to; null when there is no such thing. Removed trials still belong to theirs. */
export async function studyOf(db: Database, via: Via, id: string): Promise<StudyId | null> {
  const [row] = await studyQuery(db, via, id);
  return (row?.studyId ?? null) as StudyId | null;
}

function studyQuery(db: Database, via: Via, id: string): Promise<{ studyId: string }[]> {
  switch (via) {
    case 'studyId': return db.select({ studyId: studies.id }).from(studies).where(eq(studies.id, id));
    case 'sessionId': return db.select({ studyId: sessions.studyId }).from(sessions).where(eq(sessions.id, id));
    case 'trialId': return db.select({ studyId: sessions.studyId }).from(trials)
      .innerJoin(sessions, eq(sessions.id, trials.sessionId)).where(eq(trials.id, id));
    case 'recordingId': return db.select({ studyId: sessions.studyId }).from(recordings)
      .innerJoin(trials, eq(trials.id, recordings.trialId)).innerJoin(sessions, eq(sessions.id, trials.sessionId)).where(eq(recordings.id, id));
    case 'noteId': return db.select({ studyId: sessions.studyId }).from(notes)
      .innerJoin(trials, eq(trials.id, notes.trialId)).innerJoin(sessions, eq(sessions.id, trials.sessionId)).where(eq(notes.id, id));
  }
}

export async function membershipIn(db: Database, studyId: StudyId, personId: PersonId): Promise<Membership | null> {
  const [row] = await db.select({ role: members.role, blind: members.blind }).from(members)
    .where(and(eq(members.studyId, studyId), eq(members.personId, personId)));
  return row ? { studyId, ...row } : null;
}

export async function membershipsOf(db: Database, personId: PersonId): Promise<Membership[]> {
  const rows = await db.select({ studyId: members.studyId, role: members.role, blind: members.blind }).from(members).where(eq(members.personId, personId));
  return rows.map((row) => ({ ...row, studyId: row.studyId as StudyId }));
}

export async function isClosed(db: Database, personId: string): Promise<boolean> {
  const [row] = await db.select({ closed: people.closed }).from(people).where(eq(people.id, personId));
  return row?.closed ?? true;
}

/** Our tables, as better-auth reaches them. */
export const signInTables = (db: Database) => drizzleAdapter(db, { provider: 'pg', schema: { people, signIns, accounts, verifications } });

/** The value of a setting; made and kept when it is not there. Two servers that start at once agree on one. */
export async function settingOr(db: Database, key: string, make: () => string): Promise<string> {
  await db.insert(settings).values({ key, value: make() }).onConflictDoNothing();
  const [row] = await db.select().from(settings).where(eq(settings.key, key));
  return row?.value as string;
}

export async function writeAudit(db: Database, line: typeof auditEntries.$inferInsert): Promise<void> {
  await db.insert(auditEntries).values(line);
}

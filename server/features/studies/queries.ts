import { and, asc, count, eq, notExists, sql } from 'drizzle-orm';
import type { LabRole, PersonId, StudyId, StudyRole } from '@shared/api/common';
import type { Database } from '../../db/engine';
import { conditions, members, participants, people, ruleRevisions, sessions, studies, tasks } from '../../db/schema';

const counts = {
  participants: sql<number>`(select count(*)::int from participants p where p.study_id = ${studies.id})`,
  sessions: sql<number>`(select count(*)::int from sessions s where s.study_id = ${studies.id})`,
  recordedTrials: sql<number>`(select count(*)::int from trials t join sessions s on s.id = t.session_id
    where s.study_id = ${studies.id} and t.removed_at is null and exists (select 1 from recordings r where r.trial_id = t.id))`,
};

const summaries = (db: Database, personId: PersonId) => db
  .select({ id: studies.id, code: studies.code, title: studies.title, state: studies.state, protocol: studies.protocol, createdAt: studies.createdAt, myRole: members.role, ...counts })
  .from(studies).innerJoin(members, and(eq(members.studyId, studies.id), eq(members.personId, personId)));

export type StudyRow = Awaited<ReturnType<typeof studiesOf>>[number];

export const studiesOf = (db: Database, personId: PersonId) => summaries(db, personId).orderBy(asc(studies.code));

export async function findStudyOf(db: Database, studyId: StudyId, personId: PersonId): Promise<StudyRow | null> {
  const [row] = await summaries(db, personId).where(eq(studies.id, studyId));
  return row ?? null;
}

export const allStudies = (db: Database, personId: PersonId) => db
  .select({ id: studies.id, code: studies.code, title: studies.title, state: studies.state, member: members.role })
  .from(studies).leftJoin(members, and(eq(members.studyId, studies.id), eq(members.personId, personId)))
  .orderBy(asc(studies.code));

export async function studyExists(db: Database, id: string): Promise<boolean> {
  return (await db.select({ id: studies.id }).from(studies).where(eq(studies.id, id))).length > 0;
}

export const conditionsOf = (db: Database, studyId: StudyId) => db
  .select({ id: conditions.id, blindCode: conditions.blindCode, label: conditions.label })
  .from(conditions).where(eq(conditions.studyId, studyId)).orderBy(asc(conditions.place));

export const tasksOf = (db: Database, studyId: StudyId) => db
  .select({ id: tasks.id, code: tasks.code, title: tasks.title, timeLimitS: tasks.timeLimitS })
  .from(tasks).where(eq(tasks.studyId, studyId)).orderBy(asc(tasks.place));

export interface NewStudy {
  code: string;
  title: string;
  protocol: string;
  conditions: readonly { blindCode: string; label: string }[];
  tasks: readonly { code: string; title: string; timeLimitS: number | null }[];
  createdBy: PersonId;
}

/** With its first rule revision, which holds the default rules. @returns null when the code is taken */
export async function insertStudy(tx: Database, study: NewStudy): Promise<string | null> {
  const { conditions: newConditions, tasks: newTasks, ...values } = study;
  const [row] = await tx.insert(studies).values(values).onConflictDoNothing({ target: studies.code }).returning({ id: studies.id });
  if (!row) return null;
  await tx.insert(conditions).values(newConditions.map((each, place) => ({ ...each, studyId: row.id, place })));
  await tx.insert(tasks).values(newTasks.map((each, place) => ({ ...each, studyId: row.id, place })));
  await tx.insert(ruleRevisions).values({ studyId: row.id, revision: 1 });
  return row.id;
}

export async function updateStudy(db: Database, studyId: StudyId, change: Partial<Pick<StudyRow, 'title' | 'protocol' | 'state'>>): Promise<void> {
  if (Object.values(change).some((value) => value !== undefined)) await db.update(studies).set(change).where(eq(studies.id, studyId));
}

const memberColumns = { personId: members.personId, name: people.name, role: members.role, blind: members.blind, labRole: people.role };

export const membersOf = (db: Database, studyId: StudyId) => db.select(memberColumns).from(members)
  .innerJoin(people, eq(people.id, members.personId)).where(eq(members.studyId, studyId)).orderBy(asc(people.name));

export async function setMembership(db: Database, values: { studyId: string; personId: string; role: StudyRole; blind: boolean }): Promise<void> {
  await db.insert(members).values(values)
    .onConflictDoUpdate({ target: [members.studyId, members.personId], set: { role: values.role, blind: values.blind } });
}

export async function deleteMembership(db: Database, studyId: StudyId, personId: PersonId): Promise<void> {
  await db.delete(members).where(and(eq(members.studyId, studyId), eq(members.personId, personId)));
}

/** Held until the transaction ends, so that two changes of members cannot both take the last lead away. */
export async function holdStudy(tx: Database, studyId: StudyId): Promise<void> {
  await tx.select({ id: studies.id }).from(studies).where(eq(studies.id, studyId)).for('update');
}

export async function findOpenPerson(db: Database, personId: PersonId): Promise<{ name: string; role: LabRole } | null> {
  const [row] = await db.select({ name: people.name, role: people.role }).from(people).where(and(eq(people.id, personId), eq(people.closed, false)));
  return row ?? null;
}

/** Open people who are no members; administrators add themselves. */
export const candidatesFor = (db: Database, studyId: StudyId) => db
  .select({ id: people.id, name: people.name, role: people.role }).from(people)
  .where(and(
    eq(people.closed, false),
    notExists(db.select({ one: sql`1` }).from(members).where(and(eq(members.studyId, studyId), eq(members.personId, people.id)))),
  ))
  .orderBy(asc(people.name));

export const participantsOf = (db: Database, studyId: StudyId) => db
  .select({ id: participants.id, code: participants.code, hand: participants.hand, sessions: count(sessions.id) })
  .from(participants).leftJoin(sessions, eq(sessions.participantId, participants.id))
  .where(eq(participants.studyId, studyId)).groupBy(participants.id).orderBy(asc(participants.code));

/** @returns null when the code is taken */
export async function insertParticipant(db: Database, values: { studyId: string; code: string; hand: 'left' | 'right' | 'both' }): Promise<string | null> {
  const [row] = await db.insert(participants).values(values).onConflictDoNothing().returning({ id: participants.id });
  return row?.id ?? null;
}

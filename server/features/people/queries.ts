import { and, asc, count, eq, isNotNull } from 'drizzle-orm';
import type { LabRole, PersonId } from '@shared/api/common';
import type { Database } from '../../db/engine';
import { accounts, members, people, signIns, studies } from '../../db/schema';

export interface PersonRow {
  id: string;
  name: string;
  email: string;
  role: LabRole;
  closed: boolean;
  createdAt: Date;
  /** False until they have chosen a password. */
  hasPassword: boolean;
}

const credential = and(eq(accounts.userId, people.id), eq(accounts.providerId, 'credential'), isNotNull(accounts.password));

const personRows = (db: Database) => db
  .select({ id: people.id, name: people.name, email: people.email, role: people.role, closed: people.closed, createdAt: people.createdAt, account: accounts.id })
  .from(people).leftJoin(accounts, credential);

const withState = ({ account, ...row }: Omit<PersonRow, 'hasPassword'> & { account: string | null }): PersonRow => ({ ...row, hasPassword: account !== null });

export async function allPeople(db: Database): Promise<PersonRow[]> {
  return (await personRows(db).orderBy(asc(people.name), asc(people.id))).map(withState);
}

export async function findPerson(db: Database, id: string): Promise<PersonRow | null> {
  const [row] = await personRows(db).where(eq(people.id, id));
  return row ? withState(row) : null;
}

export async function findPersonByEmail(db: Database, email: string): Promise<PersonRow | null> {
  const [row] = await personRows(db).where(eq(people.email, email));
  return row ? withState(row) : null;
}

/** Administrators who may sign in. */
export async function openAdministrators(db: Database): Promise<number> {
  const [row] = await db.select({ n: count() }).from(people).where(and(eq(people.role, 'administrator'), eq(people.closed, false)));
  return row?.n ?? 0;
}

/** As `openAdministrators`; they are held until the transaction ends, so that two cannot leave at once. */
export async function holdAdministrators(tx: Database): Promise<string[]> {
  const rows = await tx.select({ id: people.id }).from(people).where(and(eq(people.role, 'administrator'), eq(people.closed, false))).orderBy(asc(people.id)).for('update');
  return rows.map((row) => row.id);
}

/** @returns false when the address is taken */
export async function insertPerson(db: Database, person: { id: string; name: string; email: string; role: LabRole }): Promise<boolean> {
  return (await db.insert(people).values(person).onConflictDoNothing({ target: people.email }).returning({ id: people.id })).length > 0;
}

export async function insertPassword(db: Database, account: { id: string; personId: string; passwordHash: string }): Promise<void> {
  await db.insert(accounts).values({ id: account.id, accountId: account.personId, providerId: 'credential', userId: account.personId, password: account.passwordHash });
}

export async function updatePerson(db: Database, id: string, change: { name?: string; role?: LabRole; closed?: boolean }): Promise<void> {
  await db.update(people).set({ ...change, updatedAt: new Date() }).where(eq(people.id, id));
}

export async function endSignIns(db: Database, personId: string): Promise<void> {
  await db.delete(signIns).where(eq(signIns.userId, personId));
}

export function membershipsOf(db: Database, personId: PersonId) {
  return db
    .select({ studyId: members.studyId, studyCode: studies.code, studyTitle: studies.title, role: members.role, blind: members.blind })
    .from(members).innerJoin(studies, eq(studies.id, members.studyId))
    .where(eq(members.personId, personId)).orderBy(asc(studies.code));
}

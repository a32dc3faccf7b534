/** People of the lab: the first administrator, invitations, roles, closing. */
import { randomBytes, timingSafeEqual } from 'node:crypto';
import { v7 } from 'uuid';
import { type LabRole, personId, studyId } from '@shared/api/common';
import type { BodyOf, ResponseOf } from '@shared/api/contract';
import type { changePerson, getEntrance, invitePerson, Me, Person, setUp } from '@shared/api/people';
import { fits, hashPassword, invitationDays, type SignInDesk, type SignedIn } from '../../auth';
import type { Database } from '../../db/engine';
import { invitation, type Post } from '../../mail';
import { refuse } from './errors';
import {
  allPeople, endSignIns, findPerson, findPersonByEmail, holdAdministrators, insertPassword, insertPerson, membershipsOf, openAdministrators, type PersonRow, updatePerson,
} from './queries';

export interface DemoSignIn {
  role: LabRole;
  name: string;
  email: string;
  password: string;
}

export interface PeopleDeps {
  db: Database;
  post: Post;
  desk: SignInDesk;
  publicUrl: () => string;
  /** Demo lab: who can sign in how; the screens show it. */
  demo: readonly DemoSignIn[] | null;
}

export type PeopleService = ReturnType<typeof createPeopleService>;

const toPerson = (row: PersonRow): Person => ({
  id: personId.parse(row.id),
  name: row.name,
  email: row.email,
  role: row.role,
  state: row.closed ? 'closed' : row.hasPassword ? 'active' : 'invited',
  createdAt: row.createdAt.toISOString(),
});

/** 12 characters without those that look alike, in groups: read from one screen and typed on another. */
function makeSetupCode(): string {
  const alphabet = 'ABCDEFGHJKMNPQRSTUVWXYZ23456789'; // 31 letters; the bias of a remainder is below 1 %
  const letters = [...randomBytes(12)].map((byte) => alphabet[byte % alphabet.length]);
  return [0, 4, 8].map((from) => letters.slice(from, from + 4).join('')).join('-');
}

const bare = (code: string) => Buffer.from(code.toUpperCase().replace(/[^A-Z0-9]/g, '').padEnd(12).slice(0, 12));

export function createPeopleService({ db, post, desk, publicUrl, demo }: PeopleDeps) {
  let setupCode: string | null = null;

  /** Makes a person who can sign in at once: the first administrator, the demo lab, tests. */
  async function makePerson(person: { name: string; email: string; role: LabRole; password: string }): Promise<SignedIn> {
    const id = v7();
    const passwordHash = await hashPassword(person.password);
    await db.transaction(async (tx) => {
      if (!(await insertPerson(tx, { id, name: person.name, email: person.email.toLowerCase(), role: person.role }))) throw refuse('EMAIL_TAKEN');
      await insertPassword(tx, { id: v7(), personId: id, passwordHash });
    });
    return { id: personId.parse(id), name: person.name, email: person.email.toLowerCase(), role: person.role };
  }

  async function getPerson(id: string): Promise<PersonRow> {
    const row = await findPerson(db, id);
    if (row === null) throw refuse('PERSON_UNKNOWN');
    return row;
  }

  async function me(person: SignedIn): Promise<Me> {
    const rows = await membershipsOf(db, person.id);
    const memberships = rows.filter((row) => fits(person.role, row.role)).map((row) => ({ ...row, studyId: studyId.parse(row.studyId) }));
    return { id: person.id, name: person.name, email: person.email, role: person.role, memberships, demo: demo !== null };
  }

  async function requireAnotherAdministrator(tx: Database, leaving: string): Promise<void> {
    const administrators = await holdAdministrators(tx);
    if (administrators.length === 1 && administrators[0] === leaving) throw refuse('LAST_ADMINISTRATOR');
  }

  return {
    makePerson,

    /** The one-time code for the first administrator, the same until it is used; null when there is one already. */
    async setupCode(): Promise<string | null> {
      if ((await openAdministrators(db)) > 0) return null;
      setupCode ??= makeSetupCode();
      return setupCode;
    },

    async entrance(): Promise<ResponseOf<typeof getEntrance>> {
      return { setupNeeded: (await openAdministrators(db)) === 0, demo: [...(demo ?? [])] };
    },

    async setUp({ code, name, email, password }: BodyOf<typeof setUp>): Promise<SignedIn> {
      if ((await openAdministrators(db)) > 0) throw refuse('SETUP_DONE');
      const expected = setupCode;
      if (expected === null || !timingSafeEqual(bare(code), bare(expected))) throw refuse('SETUP_CODE');
      if (await findPersonByEmail(db, email)) throw refuse('EMAIL_TAKEN');
      setupCode = null; // taken before anything waits: the same code sent twice at once makes one administrator
      try {
        return await makePerson({ name, email, role: 'administrator', password });
      } catch (error) {
        setupCode = expected;
        throw error;
      }
    },

    me,

    /** What was written before under the old name stays as it was written. */
    async rename(person: SignedIn, name: string): Promise<Me> {
      await updatePerson(db, person.id, { name });
      return me({ ...person, name });
    },

    async list(): Promise<Person[]> {
      return (await allPeople(db)).map(toPerson);
    },

    /** Inviting someone who has not answered yet sends a fresh letter. */
    async invite({ name, email, role }: BodyOf<typeof invitePerson>, by: SignedIn): Promise<Person> {
      await insertPerson(db, { id: v7(), name, email, role });
      const known = await findPersonByEmail(db, email);
      if (known === null || known.hasPassword || known.closed) throw refuse('EMAIL_TAKEN');
      const { id } = known;
      await updatePerson(db, id, { name, role });
      const link = `${publicUrl()}/reset?token=${await desk.invitationToken(id)}`;
      await post.send(email, invitation({ name, by: by.name, link, days: invitationDays }));
      return toPerson(await getPerson(id));
    },

    async change(id: string, change: BodyOf<typeof changePerson>): Promise<Person> {
      await getPerson(id);
      const leavesOffice = change.closed === true || (change.role !== undefined && change.role !== 'administrator');
      await db.transaction(async (tx) => {
        if (leavesOffice) await requireAnotherAdministrator(tx, id);
        await updatePerson(tx, id, change);
        if (change.closed === true) await endSignIns(tx, id);
      });
      return toPerson(await getPerson(id));
    },
  };
}

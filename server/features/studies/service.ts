/** Studies: what is compared, who belongs, who takes part. */
import {
  conditionId, participantId, personId, type PersonId, studyId, type StudyId, type StudyRole, taskId,
} from '@shared/api/common';
import type { BodyOf, ResponseOf } from '@shared/api/contract';
import type {
  addParticipant, changeStudy, createStudy, listAllStudies, listCandidates, listParticipants, Member, Participant, Study, StudySummary,
} from '@shared/api/studies';
import { fits, type Membership, type SignedIn } from '../../auth';
import type { Database } from '../../db/engine';
import { refuse } from './errors';
import {
  allStudies, candidatesFor, conditionsOf, deleteMembership, findOpenPerson, findStudyOf, holdStudy, insertParticipant, insertStudy, membersOf, participantsOf,
  setMembership, studiesOf, studyExists, type StudyRow, tasksOf, updateStudy,
} from './queries';

const toSummary = ({ id, code, title, state, participants, sessions, recordedTrials, myRole }: StudyRow): StudySummary => ({
  id: studyId.parse(id), code, title, state, participants, sessions, recordedTrials, myRole,
});

const hasTwins = (codes: readonly string[]) => new Set(codes).size < codes.length;

export type StudyService = ReturnType<typeof createStudyService>;

export function createStudyService(db: Database) {
  async function get(membership: Membership, person: SignedIn): Promise<Study> {
    const row = await findStudyOf(db, membership.studyId, person.id);
    if (row === null) throw refuse('STUDY_UNKNOWN');
    // One after another: the demo lab is made inside a transaction, which is one connection.
    const conditions = await conditionsOf(db, membership.studyId);
    const tasks = await tasksOf(db, membership.studyId);
    const members = await membersOf(db, membership.studyId);
    return {
      ...toSummary(row),
      protocol: row.protocol,
      conditions: conditions.map(({ id, blindCode, label }) => ({ id: conditionId.parse(id), blindCode, label: membership.blind ? null : label })),
      tasks: tasks.map((task) => ({ ...task, id: taskId.parse(task.id) })),
      members: members.filter((each) => fits(each.labRole, each.role)).map(({ personId: id, name, role, blind }) => ({ personId: personId.parse(id), name, role, blind })),
      blind: membership.blind,
      createdAt: row.createdAt.toISOString(),
    };
  }

  async function requireAnotherLead(tx: Database, study: StudyId, leaving: PersonId): Promise<void> {
    const leads = (await membersOf(tx, study)).filter((each) => each.role === 'lead' && fits(each.labRole, 'lead'));
    if (leads.length === 1 && leads[0]?.personId === leaving) throw refuse('LAST_LEAD');
  }

  async function setMember(study: StudyId, id: PersonId, role: StudyRole, blind: boolean): Promise<Member> {
    const person = await findOpenPerson(db, id);
    if (person === null) throw refuse('PERSON_UNKNOWN');
    if (!fits(person.role, role)) throw refuse('MEMBER_ROLE', { labRole: person.role, studyRole: role });
    await db.transaction(async (tx) => {
      await holdStudy(tx, study);
      if (role !== 'lead') await requireAnotherLead(tx, study, id);
      await setMembership(tx, { studyId: study, personId: id, role, blind });
    });
    return { personId: id, name: person.name, role, blind };
  }

  return {
    get,
    setMember,

    async list(person: SignedIn): Promise<StudySummary[]> {
      return (await studiesOf(db, person.id)).filter((row) => fits(person.role, row.myRole)).map(toSummary);
    },

    async listAll(person: SignedIn): Promise<ResponseOf<typeof listAllStudies>> {
      const rows = await allStudies(db, person.id);
      return { studies: rows.map(({ id, member, ...row }) => ({ ...row, id: studyId.parse(id), member: member !== null && fits(person.role, member) })) };
    },

    async create(body: BodyOf<typeof createStudy>, by: SignedIn): Promise<Study> {
      if (hasTwins(body.conditions.map((each) => each.blindCode)) || hasTwins(body.tasks.map((each) => each.code))) throw refuse('STUDY_CODES_TWICE');
      const id = await db.transaction(async (tx) => {
        const made = await insertStudy(tx, { ...body, createdBy: by.id });
        if (made === null) throw refuse('STUDY_CODE_TAKEN', { code: body.code });
        await setMembership(tx, { studyId: made, personId: by.id, role: 'lead', blind: false });
        return studyId.parse(made);
      });
      return get({ studyId: id, role: 'lead', blind: false }, by);
    },

    async change(membership: Membership, change: BodyOf<typeof changeStudy>, person: SignedIn): Promise<Study> {
      await updateStudy(db, membership.studyId, change);
      return get(membership, person);
    },

    /** An administrator lets themselves in, as a reader. */
    async join(study: StudyId, person: SignedIn): Promise<Member> {
      if (!(await studyExists(db, study))) throw refuse('STUDY_UNKNOWN');
      return setMember(study, person.id, 'reader', false);
    },

    async removeMember(study: StudyId, id: PersonId): Promise<void> {
      await db.transaction(async (tx) => {
        await holdStudy(tx, study);
        if (!(await membersOf(tx, study)).some((each) => each.personId === id)) throw refuse('MEMBER_UNKNOWN');
        await requireAnotherLead(tx, study, id);
        await deleteMembership(tx, study, id);
      });
    },

    async candidates(study: StudyId): Promise<ResponseOf<typeof listCandidates>> {
      const rows = await candidatesFor(db, study);
      return { people: rows.map((row) => ({ ...row, id: personId.parse(row.id) })) };
    },

    async participants(study: StudyId): Promise<ResponseOf<typeof listParticipants>> {
      const rows = await participantsOf(db, study);
      return { participants: rows.map((row) => ({ ...row, id: participantId.parse(row.id) })) };
    },

    async addParticipant(study: StudyId, { code, hand }: BodyOf<typeof addParticipant>): Promise<Participant> {
      const id = await insertParticipant(db, { studyId: study, code, hand });
      if (id === null) throw refuse('PARTICIPANT_TAKEN', { code });
      return { id: participantId.parse(id), code, hand, sessions: 0 };
    },
  };
}

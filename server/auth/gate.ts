/** Applies the guard table: to routes, and to the rooms of the live socket. */
import type { RouteId } from '@shared/api';
import type { Database } from '../db/engine';
import { refuseRequest } from '../http';
import { guards, may, seesSessions, type Via } from './guards';
import { type Access, fits, type Membership, type SignedIn } from './person';
import { membershipIn, membershipsOf, studyOf } from './queries';

export interface Gate {
  /** @throws Refusal SIGN_IN, FORBIDDEN or NOT_FOUND */
  pass(id: RouteId, person: SignedIn | null, params: Record<string, string>): Promise<Access>;
  /** Every place the person has in a study, those that count. */
  membershipsOf(person: SignedIn): Promise<Membership[]>;
  /** Rooms that do not exist and rooms that are closed to the person read the same: false. */
  mayEnter(person: SignedIn, room: string): Promise<boolean>;
}

const paramOf: Record<Via, string> = { studyId: 'studyId', sessionId: 'sessionId', trialId: 'trialId', recordingId: 'recordingId', noteId: 'noteId' };
const roomVia: Record<string, Via | undefined> = { study: 'studyId', session: 'sessionId', trial: 'trialId' };

/** Things inside a study's sessions, as opposed to the study itself. */
const isInsideSession = (via: Via) => via !== 'studyId';

export function createGate(db: Database, demo: boolean): Gate {
  async function placeOf(person: SignedIn, via: Via, id: string): Promise<Membership | null> {
    const studyId = await studyOf(db, via, id);
    const membership = studyId === null ? null : await membershipIn(db, studyId, person.id);
    return membership !== null && fits(person.role, membership.role) ? membership : null;
  }

  return {
    async pass(id, person, params) {
      const guard = guards[id];
      if (guard.kind === 'anyone') return { person, membership: null };
      if (person === null) throw refuseRequest('SIGN_IN');
      if (guard.kind === 'signedIn') return { person, membership: null };
      if (guard.kind === 'lab') {
        if (!guard.roles.includes(person.role) && !(demo && guard.everyoneInDemo)) throw refuseRequest('FORBIDDEN');
        return { person, membership: null };
      }
      const membership = await placeOf(person, guard.via, params[paramOf[guard.via]] ?? '');
      if (membership === null) throw refuseRequest('NOT_FOUND');
      if (isInsideSession(guard.via) && seesSessions(membership.role) === 'none') throw refuseRequest('NOT_FOUND');
      if (!guard.roles.includes(membership.role)) throw refuseRequest('FORBIDDEN');
      return { person, membership };
    },

    async membershipsOf(person) {
      return (await membershipsOf(db, person.id)).filter((each) => fits(person.role, each.role));
    },

    async mayEnter(person, room) {
      if (room === 'devices') return may.seeDevices(person.role);
      const [kind = '', id = ''] = room.split(':');
      const via = roomVia[kind];
      if (via === undefined) return false;
      const membership = await placeOf(person, via, id);
      return membership !== null && seesSessions(membership.role) === 'all';
    },
  };
}

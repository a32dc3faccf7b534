/**
 * Who may do what: the only place that decides.
 *
 * One line a route. A caller who is not a member of the study reads as if the thing were absent; a member without the
 * right is told so.
 */
import type { RouteId } from '@shared/api';
import type { LabRole, StudyRole } from '@shared/api/common';

/** Where the study of a route is found: in which parameter, or through which thing. */
export type Via = 'studyId' | 'sessionId' | 'trialId' | 'recordingId' | 'noteId';

export type Guard =
  | { readonly kind: 'anyone' }
  | { readonly kind: 'signedIn' }
  | { readonly kind: 'lab'; readonly roles: readonly LabRole[]; readonly everyoneInDemo?: boolean }
  | { readonly kind: 'study'; readonly via: Via; readonly roles: readonly StudyRole[] };

const anyone: Guard = { kind: 'anyone' };
const signedIn: Guard = { kind: 'signedIn' };
const lab = (...roles: LabRole[]): Guard => ({ kind: 'lab', roles });
const inStudy = (via: Via) => (...roles: StudyRole[]): Guard => ({ kind: 'study', via, roles });

const onStudy = inStudy('studyId');
const onSession = inStudy('sessionId');
const onTrial = inStudy('trialId');
const onRecording = inStudy('recordingId');
const onNote = inStudy('noteId');

export const guards: Record<RouteId, Guard> = {
  'api.describe': anyone,
  'auth.signIn': anyone,
  'auth.signOut': anyone,
  'auth.session': anyone,
  'auth.sessions': signedIn,
  'auth.endSession': signedIn,
  'auth.endOtherSessions': signedIn,
  'auth.changePassword': signedIn,
  'auth.requestReset': anyone,
  'auth.passwordReset': anyone,

  'entrance.get': anyone,
  'setup.make': anyone,
  'me.get': signedIn,
  'me.change': signedIn,

  'people.list': lab('administrator'),
  'people.invite': lab('administrator'),
  'people.change': lab('administrator'),
  'audit.list': lab('administrator'),
  'outbox.list': { kind: 'lab', roles: ['administrator'], everyoneInDemo: true },

  'rigs.list': signedIn,
  'rigs.get': signedIn,
  'rigRevisions.get': signedIn,
  'rigs.import': lab('administrator', 'lead'),
  'devices.list': lab('administrator', 'lead', 'operator'),
  'devices.register': lab('administrator'),
  'devices.revoke': lab('administrator'),

  'studies.list': signedIn,
  'studies.listAll': lab('administrator'),
  'studies.create': lab('lead'),
  'studies.get': onStudy('lead', 'operator', 'clinician', 'reader'),
  'studies.change': onStudy('lead'),
  'members.set': onStudy('lead'),
  'members.remove': onStudy('lead'),
  'members.candidates': onStudy('lead'),
  'members.join': lab('administrator'),
  'participants.list': onStudy('lead', 'operator', 'reader'),
  'participants.add': onStudy('lead', 'operator'),

  'sessions.list': onStudy('lead', 'operator', 'clinician', 'reader'),
  'sessions.today': signedIn,
  'sessions.plan': onStudy('lead', 'operator'),
  'sessions.get': onSession('lead', 'operator', 'clinician', 'reader'),
  'sessions.close': onSession('lead', 'operator'),
  'sessions.log': onSession('lead', 'operator'),
  'trials.add': onSession('lead', 'operator'),
  'trials.get': onTrial('lead', 'operator', 'clinician', 'reader'),
  'trials.arm': onTrial('lead', 'operator'),
  'trials.disarm': onTrial('lead', 'operator'),
  'trials.stop': onTrial('lead', 'operator'),
  'trials.judge': onTrial('lead', 'operator'),
  'trials.remove': onTrial('lead'),

  'moments.list': onStudy('lead', 'operator', 'reader'),
  'verdicts.list': onTrial('lead', 'operator', 'reader'),
  'verdicts.give': onStudy('lead'),
  'flags.list': onTrial('lead', 'operator', 'clinician', 'reader'),
  'recordings.window': onRecording('lead', 'operator', 'clinician', 'reader'),
  'recordings.csv': onTrial('lead'),
  'recordings.import': onTrial('lead', 'operator'),
  'notes.list': onTrial('lead', 'operator', 'clinician', 'reader'),
  'notes.add': onTrial('lead', 'operator', 'clinician', 'reader'),
  'notes.reply': onNote('lead', 'operator', 'clinician', 'reader'),
  'notes.edit': onNote('lead', 'operator', 'clinician', 'reader'),
  'notes.resolve': onNote('lead', 'operator', 'clinician', 'reader'),
  'notes.versions': onNote('lead', 'operator', 'clinician', 'reader'),
};

/** Routes that answer whoever asks. */
export const isOpen = (id: RouteId): boolean => guards[id].kind === 'anyone';

/** Routes after which somebody may no longer be where they are: watchers of the live socket are looked at again. */
export const changesAccess: ReadonlySet<string> = new Set<RouteId>([
  'people.change', 'members.set', 'members.remove', 'auth.signOut', 'auth.endSession', 'auth.endOtherSessions', 'auth.changePassword', 'auth.passwordReset',
]);

/**
 * Sessions of a study that a member sees. Clinicians see those that a released summary names; until one is released,
 * none.
 */
export const seesSessions = (role: StudyRole): 'all' | 'none' => (role === 'clinician' ? 'none' : 'all');

/** Rights that pages show or hide buttons by. */
export const may = {
  note: (role: StudyRole) => seesSessions(role) === 'all',
  run: (role: StudyRole) => role === 'lead' || role === 'operator',
  remove: (role: StudyRole) => role === 'lead',
  export: (role: StudyRole) => role === 'lead',
  judge: (role: StudyRole) => role === 'lead',
  seeDevices: (role: LabRole) => role !== 'clinician',
};

/** How every route is called so that it works for whom it is meant: fresh things where a call uses them up. */
import { randomUUID } from 'node:crypto';
import type { ParticipantId } from '@shared/api/common';
import type { RouteId } from '@shared/api';
import type { SignedIn } from '@server/auth';
import { channelNames } from '@shared/recording';
import { heronFile, type MiniLab, type TestApp, testPassword } from '../support/app';

export interface Target {
  params?: Record<string, string>;
  query?: string;
  body?: unknown;
  /** A body that is no JSON. */
  text?: { type: string; body: string };
  /** Code of the refusal that shows that the guard let the caller in, where no answer of 200 can be had. */
  refusedBy?: string;
}

export interface Ground {
  app: TestApp;
  lab: MiniLab;
  /** Somebody to be added to and taken out of the study. */
  spare: SignedIn;
  recordingId: string;
  /** A trial with a recording and an outcome. */
  recordedTrial: string;
}

type Calls = Record<RouteId, (ground: Ground, caller: SignedIn | null) => Target | Promise<Target>>;

let count = 0;
const another = () => (count += 1);
const letters = (n: number) => [...n.toString(26)].map((digit) => String.fromCharCode(65 + Number.parseInt(digit, 26))).join('');

const onStudy = ({ lab }: Ground): Target => ({ params: { studyId: lab.study.id } });
const onSession = ({ lab }: Ground): Target => ({ params: { sessionId: lab.sessionId } });
const onRecorded = ({ recordedTrial }: Ground): Target => ({ params: { trialId: recordedTrial } });
const planned = ({ lab }: Ground) => ({ taskId: lab.study.tasks[0]!.id, conditionId: lab.study.conditions[0]!.id });

async function freshTrial({ app, lab }: Ground): Promise<Target> {
  return { params: { trialId: await app.book.services.sessions.addTrial(lab.sessionId, planned({ lab } as Ground), lab.people.lead) } };
}

const plan = ({ lab }: Ground) => ({ participantId: lab.participantId as ParticipantId, rigRevisionId: lab.rig.id, plannedAt: new Date().toISOString(), trials: [] });

/** A note of the caller's own where they may write one, else of the lead's. */
async function noteOf(ground: Ground, caller: SignedIn | null): Promise<Target> {
  const { app, lab, recordedTrial } = ground;
  const note = await app.book.services.notes.add(recordedTrial as MiniLab['trialIds'][number], { startS: 0.1, endS: null, cables: [], text: 'Here.', clientKey: randomUUID() }, caller ?? lab.people.lead);
  return { params: { noteId: note.id } };
}

const csv = ['t_s', ...channelNames(8)].join(',') + '\n' + [0, 1, 2, 3].map((i) => [i / 1000, ...channelNames(8).map((name) => (name === 'qw' ? 1 : 0.5))].join(',')).join('\n') + '\n';

export const calls: Calls = {
  'api.describe': () => ({}),
  'auth.signIn': () => ({ body: { email: 'nobody@lab.example', password: 'no password' }, refusedBy: 'INVALID_EMAIL_OR_PASSWORD' }),
  'auth.signOut': () => ({}),
  'auth.session': () => ({}),
  'auth.sessions': () => ({}),
  'auth.endSession': () => ({ body: { token: 'of nobody' } }),
  'auth.endOtherSessions': () => ({}),
  'auth.changePassword': () => ({ body: { currentPassword: 'not the password', newPassword: testPassword }, refusedBy: 'INVALID_PASSWORD' }),
  'auth.requestReset': () => ({ body: { email: 'nobody@lab.example' } }),
  'auth.passwordReset': () => ({ body: { token: 'of no letter', newPassword: testPassword }, refusedBy: 'INVALID_TOKEN' }),
  'entrance.get': () => ({}),
  'setup.make': () => ({ body: { code: 'AAAA-AAAA-AAAA', name: 'Second', email: 'second@lab.example', password: testPassword }, refusedBy: 'SETUP_DONE' }),
  'me.get': () => ({}),
  'me.change': (_, caller) => ({ body: { name: caller?.name ?? 'Nobody' } }),

  'people.list': () => ({}),
  'people.invite': () => ({ body: { name: 'Invited', email: `invited-${another()}@lab.example`, role: 'operator' } }),
  'people.change': ({ spare }) => ({ params: { personId: spare.id }, body: { closed: false } }),
  'audit.list': () => ({ query: 'limit=10' }),
  'outbox.list': () => ({}),
  'devices.list': () => ({}),
  'devices.register': ({ lab }) => ({ body: { name: 'another bench', rigId: lab.rig.rigId } }),
  'devices.revoke': async ({ app, lab }) => ({ params: { deviceId: (await app.book.services.devices.register('to be revoked', lab.rig.rigId)).device.id } }),
  'rigs.list': () => ({}),
  'rigs.get': ({ lab }) => ({ params: { rigId: lab.rig.rigId } }),
  'rigRevisions.get': ({ lab }) => ({ params: { rigRevisionId: lab.rig.id } }),
  'rigs.import': () => ({ body: { file: { ...heronFile, code: `made-${another()}` } } }),

  'studies.list': () => ({}),
  'studies.listAll': () => ({}),
  'studies.create': () => ({ body: { code: `MADE-${letters(another())}`, title: 'Made', conditions: [{ blindCode: 'A', label: 'one' }], tasks: [{ code: 'x', title: 'X' }] } }),
  'studies.get': onStudy,
  'studies.change': (ground) => ({ ...onStudy(ground), body: { title: 'Reach with and without cue' } }),
  'members.set': ({ lab, spare }) => ({ params: { studyId: lab.study.id, personId: spare.id }, body: { role: 'operator' } }),
  'members.remove': async ({ app, lab, spare }) => {
    await app.book.services.studies.setMember(lab.study.id, spare.id, 'operator', false);
    return { params: { studyId: lab.study.id, personId: spare.id } };
  },
  'members.candidates': onStudy,
  // A study that has none of the callers in it, so that joining leaves their place in the other one alone.
  'members.join': async ({ app, lab }) => {
    const made = await app.book.services.studies.create({ code: `JOIN-${letters(another())}`, title: 'To be joined', protocol: '', conditions: [{ blindCode: 'A', label: 'one' }], tasks: [{ code: 'x', title: 'X', timeLimitS: null }] }, lab.people.lead);
    return { params: { studyId: made.id } };
  },
  'participants.list': onStudy,
  'participants.add': (ground) => ({ ...onStudy(ground), body: { code: `K-${1000 + another()}` } }),

  'sessions.list': onStudy,
  'sessions.today': () => ({}),
  'sessions.plan': (ground) => ({ ...onStudy(ground), body: plan(ground) }),
  'sessions.get': onSession,
  'sessions.close': async (ground) => ({ params: { sessionId: await ground.app.book.services.sessions.plan(ground.lab.study.id, plan(ground), ground.lab.people.lead) } }),
  'sessions.log': onSession,
  'trials.add': (ground) => ({ ...onSession(ground), body: planned(ground) }),
  'trials.get': onRecorded,
  'trials.arm': async (ground) => ({ ...(await freshTrial(ground)), body: { deviceId: ground.lab.deviceId }, refusedBy: 'DEVICE_AWAY' }),
  'trials.disarm': async (ground) => ({ ...(await freshTrial(ground)), refusedBy: 'TRIAL_STATE' }),
  'trials.stop': async (ground) => ({ ...(await freshTrial(ground)), refusedBy: 'TRIAL_STATE' }),
  'trials.judge': (ground) => ({ ...onRecorded(ground), body: { outcome: 'completed' } }),
  'trials.remove': async (ground) => ({ ...(await freshTrial(ground)), body: { reason: 'planned by mistake' } }),

  'flags.list': onRecorded,
  'moments.list': onStudy,
  'verdicts.list': onRecorded,
  'verdicts.give': (ground) => ({ ...onStudy(ground), body: { verdicts: [{ flagId: randomUUID(), value: 'unsure', seen: null }] }, refusedBy: 'FLAG_UNKNOWN' }),
  'recordings.window': ({ recordingId }) => ({ params: { recordingId }, query: 'from=0&to=1' }),
  'recordings.csv': onRecorded,
  'recordings.import': async (ground) => ({ ...(await freshTrial(ground)), query: 'fileName=made.csv', text: { type: 'text/csv', body: csv } }),
  'notes.list': onRecorded,
  'notes.add': (ground) => ({ ...onRecorded(ground), body: { startS: 0.1, text: 'Here.', clientKey: randomUUID() } }),
  'notes.reply': async (ground, caller) => ({ ...(await noteOf(ground, caller)), body: { text: 'There.', clientKey: randomUUID() } }),
  'notes.edit': async (ground, caller) => ({ ...(await noteOf(ground, caller)), body: { text: 'There.', onVersion: 1 } }),
  'notes.resolve': async (ground, caller) => ({ ...(await noteOf(ground, caller)), body: { resolved: true } }),
  'notes.versions': noteOf,
};

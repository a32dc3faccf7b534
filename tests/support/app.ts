/**
 * A whole Tautbook on a free port, with a small made-up lab: one person of each role in a study and one outside it, the
 * rig heron-8, a device with its key, one planned session.
 */
import { readFileSync } from 'node:fs';
import type { AddressInfo } from 'node:net';
import { fileURLToPath } from 'node:url';
import { pino } from 'pino';
import type { DeviceId, LabRole, ParticipantId, SessionId, TrialId } from '@shared/api/common';
import type { RigRevision } from '@shared/api/rigs';
import type { Study } from '@shared/api/studies';
import { createTautbook, type Tautbook, type TautbookOptions } from '@server/app';
import type { SignedIn } from '@server/auth';
import { loadConfig } from '@server/config';
import type { OpenDatabase } from '@server/db/engine';
import { testDatabase } from './database';
import { HttpClient } from './http-client';

/** Written once; hashing is slow on purpose, so everybody in the test lab has the same. */
export const testPassword = 'a test password';

export const heronFile = JSON.parse(readFileSync(fileURLToPath(new URL('../../samples/rigs/heron-8.json', import.meta.url)), 'utf8')) as Record<string, unknown>;

export interface TestApp {
  url: string;
  open: OpenDatabase;
  book: Tautbook;
  /** Warnings and errors that the server logged. */
  logged: { level: number; msg: string }[];
  nobody(): HttpClient;
  /** Makes a person who can sign in. */
  person(role: LabRole, name: string): Promise<SignedIn>;
  signedIn(person: { email: string }): Promise<HttpClient>;
  close(): Promise<void>;
}

export async function startApp(options: Partial<Pick<TautbookOptions, 'demo' | 'link' | 'rateLimits' | 'clientDirectory'>> & { env?: Record<string, string> } = {}): Promise<TestApp> {
  const open = await testDatabase();
  const logged: TestApp['logged'] = [];
  const log = pino({ level: 'warn' }, { write: (line: string) => logged.push(JSON.parse(line) as { level: number; msg: string }) });
  const config = loadConfig({ PORT: '0', AUTH_SECRET: 'a secret of the tests, long enough to be one', ...options.env });
  const book = await createTautbook({ config, open, log, checkResponses: true, ...options });
  await book.listen();
  // Where it listens; with PUBLIC_URL people would type another address.
  const url = `http://127.0.0.1:${(book.server.address() as AddressInfo).port}`;
  return {
    url, open, book, logged,
    nobody: () => new HttpClient(url),
    person: (role, name) => book.services.people.makePerson({ role, name, email: `${name.toLowerCase().replaceAll(' ', '.')}@lab.example`, password: testPassword }),
    async signedIn({ email }) {
      const client = new HttpClient(url);
      const { status } = await client.signIn(email, testPassword);
      if (status !== 200) throw new Error(`${email} could not sign in: ${status}`);
      return client;
    },
    async close() {
      await book.close();
      await open.close();
    },
  };
}

export interface MiniLab {
  people: Record<LabRole, SignedIn>;
  study: Study;
  rig: RigRevision;
  participantId: ParticipantId;
  sessionId: SessionId;
  /** Three planned trials. */
  trialIds: TrialId[];
  deviceId: DeviceId;
  deviceKey: string;
}

/** Fills an app. The lead starts the study; the operator, the clinician and the administrator are members too. */
export async function makeMiniLab(app: TestApp, prefix = ''): Promise<MiniLab> {
  const { rigs, studies, devices, sessions, sessionReader } = app.book.services;
  const make = (role: LabRole) => app.person(role, `${prefix}${role}`);
  const everyone = { administrator: await make('administrator'), lead: await make('lead'), operator: await make('operator'), clinician: await make('clinician') };
  const rig = (await rigs.list()).length > 0 ? await rigs.getRevision((await rigs.list())[0]!.latest) : await rigs.import(heronFile, '', everyone.administrator);
  const study = await studies.create({
    code: `${prefix.toUpperCase().replace(/[^A-Z]/g, '')}REACH`, title: 'Reach with and without cue', protocol: 'Made up.',
    conditions: [{ blindCode: 'A', label: 'with cue' }, { blindCode: 'B', label: 'without cue' }],
    tasks: [{ code: 'place', title: 'Pick and place', timeLimitS: 60 }],
  }, everyone.lead);
  await studies.setMember(study.id, everyone.operator.id, 'operator', false);
  await studies.setMember(study.id, everyone.clinician.id, 'clinician', false);
  await studies.join(study.id, everyone.administrator);
  const participant = await studies.addParticipant(study.id, { code: 'K-001', hand: 'right' });
  const trial = { taskId: study.tasks[0]!.id, conditionId: study.conditions[0]!.id };
  const sessionId = await sessions.plan(study.id, { participantId: participant.id, rigRevisionId: rig.id, plannedAt: new Date().toISOString(), trials: [trial, trial, { ...trial, conditionId: study.conditions[1]!.id }] }, everyone.operator);
  const { trials } = await sessionReader.get(sessionId, { blind: false });
  const { device, key } = await devices.register(`${prefix}bench one`, rig.rigId);
  return { people: everyone, study, rig, participantId: participant.id, sessionId, trialIds: trials.map(({ id }) => id), deviceId: device.id, deviceKey: key };
}


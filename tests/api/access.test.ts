/** Every route of the API, and every room of the live socket, against who may do what. */
import { randomUUID } from 'node:crypto';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import type { RouteId } from '@shared/api';
import type { Problem } from '@shared/api/common';
import type { Trial } from '@shared/api/sessions';
import type { SignedIn } from '@server/auth';
import { makeMiniLab, startApp } from '../support/app';
import { BenchDevice } from '../support/bench-device';
import { contentsOf } from '../support/database';
import type { HttpClient } from '../support/http-client';
import { LiveViewer } from '../support/live-viewer';
import { calls, type Ground, type Target } from './access-calls';
import { access, type Caller, callers, type Cell, roomAccess } from './access-table';
import { type Description, operationsOf } from './api-description';

let ground: Ground;
let description: Description;
const people = {} as Record<Caller, SignedIn | null>;
const clients = {} as Record<Caller, HttpClient>;

const unlimited = { windowMs: 1000, limit: 100_000, failuresOnly: false };

beforeAll(async () => {
  const app = await startApp({ rateLimits: { signIn: unlimited, mail: unlimited } });
  const lab = await makeMiniLab(app);
  const device = await BenchDevice.connect(app.url, lab.deviceKey);
  const [trialId] = lab.trialIds;
  await app.book.services.sessions.arm(trialId!, lab.deviceId, lab.people.operator);
  await device.begin(trialId!, 'run-1', 500);
  await device.end('run-1', 500);
  await device.leave();
  await app.book.analysis.settled();
  await app.book.services.sessions.judge(trialId!, { outcome: 'completed', reason: '' }, lab.people.operator);

  for (const caller of callers) {
    if (caller === 'nobody') {
      people[caller] = null;
      clients[caller] = app.nobody();
      continue;
    }
    const [role, place] = caller.split(' ') as [SignedIn['role'], 'in' | 'out'];
    people[caller] = place === 'in' ? lab.people[role] : await app.person(role, `outer ${role}`);
    clients[caller] = await app.signedIn(people[caller]);
  }
  description = (await clients.nobody.get<Description>('/api/openapi.json')).body;
  const trial = (await clients['lead in'].get<Trial>(`/api/trials/${trialId}`)).body;
  ground = { app, lab, spare: await app.person('operator', 'spare'), recordingId: trial.recording!.id, recordedTrial: trialId! };
});
afterAll(() => ground.app.close());

interface Heard {
  status: number;
  code: string | undefined;
  /** Without what differs from request to request. */
  said: string;
}

async function ask(client: HttpClient, id: RouteId, { params = {}, query, body, text }: Target): Promise<Heard> {
  const { method, path, check } = operationsOf(description).get(id)!;
  const address = path.replace(/\{(\w+)\}/g, (_, name: string) => params[name]!) + (query ? `?${query}` : '');
  const response = await client.raw(method, address, text
    ? { body: text.body, headers: { 'content-type': text.type } }
    : body === undefined ? {} : { body: JSON.stringify(body), headers: { 'content-type': 'application/json' } });
  const faults = await check(response.clone());
  expect(faults, `${id} answers as described`).toEqual([]);
  if (response.status === 200) {
    await response.arrayBuffer();
    return { status: 200, code: undefined, said: '' };
  }
  const { requestId: _, ...problem } = await response.json() as Problem;
  return { status: response.status, code: problem.code, said: JSON.stringify(problem) };
}

/** The same call about things that do not exist. */
const elsewhere = (target: Target): Target => ({ ...target, params: Object.fromEntries(Object.keys(target.params ?? {}).map((name) => [name, randomUUID()])) });

const meant: Record<Exclude<Cell, 'yes'>, (id: RouteId) => Heard['code'][]> = {
  'sign-in': () => ['SIGN_IN'],
  no: () => ['FORBIDDEN'],
  absent: () => ['NOT_FOUND'],
};

describe('who may do what', () => {
  it('is written down for every route that the API describes, and for no other', () => {
    expect([...access.keys()].sort()).toEqual([...operationsOf(description).keys()].sort());
    expect(Object.keys(calls).sort()).toEqual([...access.keys()].sort());
  });

  it.each(callers)('holds for %s', async (caller) => {
    const routes = [...access].map(([id, row]) => ({ id: id as RouteId, cell: row[caller] }));
    // Signing out comes last, or nobody would ask the rest.
    const allowed = routes.filter(({ cell }) => cell === 'yes').sort((a, b) => Number(a.id === 'auth.signOut') - Number(b.id === 'auth.signOut'));
    const refused = routes.filter(({ cell }) => cell !== 'yes');

    const targets = new Map<RouteId, Target>();
    for (const { id } of refused) targets.set(id, await calls[id](ground, people[caller]));
    const before = await contentsOf(ground.app.open.db);
    const heard: Record<string, string> = {};
    for (const { id, cell } of refused) {
      const target = targets.get(id)!;
      const { code, said } = await ask(clients[caller], id, target);
      heard[id] = meant[cell as 'no'](id).includes(code) ? cell : `${code}`;
      // Not to be told from what does not exist, down to the words.
      if (cell === 'absent') expect(await ask(clients[caller], id, elsewhere(target)), id).toMatchObject({ said });
    }
    expect(heard).toEqual(Object.fromEntries(refused.map(({ id, cell }) => [id, cell])));
    expect(await contentsOf(ground.app.open.db), 'what is refused changes nothing').toEqual(before);

    const letIn: Record<string, string> = {};
    for (const { id } of allowed) {
      const target = await calls[id](ground, people[caller]);
      const { status, code, said } = await ask(clients[caller], id, target);
      const isIn = target.refusedBy === undefined ? status === 200 : code === target.refusedBy;
      letIn[id] = isIn ? 'yes' : `${status} ${said}`;
    }
    expect(letIn).toEqual(Object.fromEntries(allowed.map(({ id }) => [id, 'yes'])));
  });

  it('leaves everybody else signed in when one signs out', async () => {
    const [lead, again] = [await ground.app.signedIn(ground.lab.people.lead), await ground.app.signedIn(ground.lab.people.lead)];
    await lead.post('/api/auth/sign-out');
    expect((await lead.get('/api/me')).status).toBe(401);
    expect((await again.get('/api/me')).status).toBe(200);
  });

  it('ends with the membership, and with a role in the lab that no longer fits it', async () => {
    const { app, lab } = ground;
    const client = await app.signedIn(lab.people.operator);
    const path = `/api/trials/${ground.recordedTrial}`;
    expect((await client.get(path)).status).toBe(200);
    await app.book.services.people.change(lab.people.operator.id, { role: 'clinician' });
    expect((await client.get(path)).status).toBe(404);
    expect((await client.get<{ memberships: unknown[] }>('/api/me')).body.memberships).toEqual([]);
    await app.book.services.people.change(lab.people.operator.id, { role: 'operator' });
    expect((await client.get(path)).status).toBe(200);
    await app.book.services.studies.removeMember(lab.study.id, lab.people.operator.id);
    expect((await client.get(path)).status).toBe(404);
    await app.book.services.studies.setMember(lab.study.id, lab.people.operator.id, 'operator', false);
  });

  it('gives a clinician an empty list of sessions, and nothing in it, until something is released', async () => {
    const client = await ground.app.signedIn(ground.lab.people.clinician);
    expect((await client.get(`/api/studies/${ground.lab.study.id}/sessions`)).body).toEqual({ sessions: [] });
    expect((await client.get('/api/today')).body).toEqual({ sessions: [], toJudge: [], recent: [] });
  });

  it('writes down what a clinician reads of a study', async () => {
    const administrator = await ground.app.signedIn(ground.lab.people.administrator);
    const { body } = await administrator.get<{ entries: { who: string; action: string; detail: { studyId?: string } }[] }>('/api/audit');
    expect(body.entries).toContainEqual(expect.objectContaining({ who: 'clinician', action: 'sessions.list', detail: expect.objectContaining({ studyId: ground.lab.study.id }) }));
  });
});

describe('the rooms of the live socket', () => {
  const roomsOf = ({ lab, recordedTrial }: Ground): Record<string, string> => ({ devices: 'devices', study: `study:${lab.study.id}`, session: `session:${lab.sessionId}`, trial: `trial:${recordedTrial}` });

  it.each(callers)('open and stay closed for %s', async (caller) => {
    const { app } = ground;
    const person = people[caller];
    const viewer = await LiveViewer.open(app.url, person ? await app.signedIn(person) : app.nobody());
    expect(viewer !== null).toBe(person !== null);
    const heard: Record<string, string> = {};
    for (const [name, room] of Object.entries(roomsOf(ground))) heard[name] = viewer === null ? 'sign-in' : (await viewer.join(room)) ? 'yes' : 'no';
    viewer?.leave();
    expect(heard).toEqual(Object.fromEntries([...roomAccess].map(([name, row]) => [name, row[caller]])));
  });

  it('are left by who loses their membership, at once, and only those', async () => {
    const { app, lab } = ground;
    const lead = await app.signedIn(lab.people.lead);
    const path = `/api/studies/${lab.study.id}/members/${ground.spare.id}`;
    await lead.put(path, { role: 'operator' });
    const viewer = (await LiveViewer.open(app.url, await app.signedIn(ground.spare)))!;
    const { trial, devices } = roomsOf(ground) as { trial: string; devices: string };
    expect([await viewer.join(trial), await viewer.join(devices)]).toEqual([true, true]);
    await lead.delete(path);
    expect(await viewer.next(trial, ['refused'])).toMatchObject({ code: 'ROOM_UNKNOWN' });
    expect(await viewer.join(trial)).toBe(false);
    expect(viewer.heard).not.toContainEqual({ type: 'refused', room: devices, code: 'ROOM_UNKNOWN' });
    viewer.leave();
  });

  it('are left by who may no longer come in with their new role', async () => {
    const { app, lab } = ground;
    const administrator = await app.signedIn(lab.people.administrator);
    const viewer = (await LiveViewer.open(app.url, await app.signedIn(ground.spare)))!;
    expect(await viewer.join('devices')).toBe(true);
    await administrator.patch(`/api/people/${ground.spare.id}`, { role: 'clinician' });
    await viewer.next('devices', ['refused']);
    expect(await viewer.join('devices')).toBe(false);
    viewer.leave();
    await administrator.patch(`/api/people/${ground.spare.id}`, { role: 'operator' });
  });

  it('close for who signs out, is signed out from elsewhere, or is closed', async () => {
    const { app, lab } = ground;
    const administrator = await app.signedIn(lab.people.administrator);
    const [first, second, third] = [await app.signedIn(ground.spare), await app.signedIn(ground.spare), await app.signedIn(ground.spare)];
    const [one, two, three] = [(await LiveViewer.open(app.url, first))!, (await LiveViewer.open(app.url, second))!, (await LiveViewer.open(app.url, third))!];
    await first.post('/api/auth/sign-out');
    expect(await one.gone).toBe(1008);
    await third.post('/api/auth/revoke-other-sessions');
    expect(await two.gone).toBe(1008);
    expect(await three.join('devices')).toBe(true);
    await administrator.patch(`/api/people/${ground.spare.id}`, { closed: true });
    expect(await three.gone).toBe(1008);
    await administrator.patch(`/api/people/${ground.spare.id}`, { closed: false });
  });
});

it('logs no warning while all this happens as expected', () => {
  expect(ground.app.logged).toEqual([]);
});

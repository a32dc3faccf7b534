/** What goes wrong at the door of the API: a code, a plain sentence and a way out each time, and nothing is changed. */
import { randomUUID } from 'node:crypto';
import { request } from 'node:http';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { problem, type Problem } from '@shared/api/common';
import type { Device } from '@shared/api/rigs';
import { faultKinds } from '@shared/link';
import { channelNames } from '@shared/recording';
import { heronFile, makeMiniLab, type MiniLab, startApp, type TestApp } from '../support/app';
import { BenchDevice } from '../support/bench-device';
import { contentsOf } from '../support/database';
import { hello, LinkClient, UpgradeRefusal } from '../support/link-client';
import type { HttpClient } from '../support/http-client';

let app: TestApp;
let lab: MiniLab;
let lead: HttpClient;
let operator: HttpClient;
let administrator: HttpClient;
beforeAll(async () => {
  app = await startApp();
  lab = await makeMiniLab(app);
  [lead, operator, administrator] = await Promise.all([app.signedIn(lab.people.lead), app.signedIn(lab.people.operator), app.signedIn(lab.people.administrator)]);
});
afterAll(() => app.close());

/** The server tidies sign-ins that are over, and notes in its own time when a device was last seen. */
const contents = () => contentsOf(app.open.db, ['sign_ins', 'devices']);

const json = { 'content-type': 'application/json' };

/** Sends something that is refused. @returns the problem, after looking that it is a whole one and that nothing was stored */
async function refused(client: HttpClient, method: string, path: string, init: Parameters<HttpClient['raw']>[2] | object = {}): Promise<Problem> {
  const before = await contents();
  const isInit = 'headers' in init || Object.keys(init).length === 0;
  const response = await client.raw(method, path, isInit ? init as Parameters<HttpClient['raw']>[2] : { body: JSON.stringify(init), headers: json });
  expect(response.headers.get('content-type')).toContain('application/problem+json');
  const told = problem.parse(await response.json());
  expect(told.status).toBe(response.status);
  expect(told.detail).toMatch(/^\p{Lu}.*\.$/u);
  expect(told.wayOut).toMatch(/^\p{Lu}.*\.$/u);
  expect(told.requestId).toBe(response.headers.get('x-request-id'));
  expect(await contents()).toEqual(before);
  return told;
}

describe('signing in', () => {
  it('with a wrong password, or as somebody unknown, gets one and the same answer', async () => {
    const wrong = await refused(app.nobody(), 'POST', '/api/auth/sign-in/email', { email: lab.people.lead.email, password: 'not the password' });
    expect(wrong).toMatchObject({ status: 401, code: 'INVALID_EMAIL_OR_PASSWORD' });
    const unknown = await refused(app.nobody(), 'POST', '/api/auth/sign-in/email', { email: 'stranger@lab.example', password: 'not the password' });
    expect({ ...unknown, requestId: '' }).toEqual({ ...wrong, requestId: '' });
  });

  it.each([
    ['no e-mail address', { email: 'lead', password: 'x' }, 'email'],
    ['no password', { email: 'lead@lab.example' }, 'password'],
    ['a password that is a list', { email: 'lead@lab.example', password: ['x'] }, 'password'],
    ['a password of a million letters', { email: 'lead@lab.example', password: 'x'.repeat(900_000) }, 'password'],
  ])('with %s is told which field', async (_what, body, path) => {
    expect(await refused(app.nobody(), 'POST', '/api/auth/sign-in/email', body)).toMatchObject({ status: 422, code: 'INVALID', faults: [{ path }] });
  });

  it('that is over is told so, also in the middle of writing', async () => {
    const client = await app.signedIn(await app.person('operator', 'Ellis Over'));
    await app.open.db.execute(`update sign_ins set expires_at = now() - interval '1 second' where user_id = (select id from people where name = 'Ellis Over')`);
    expect(await refused(client, 'PATCH', '/api/me', { name: 'Too late' })).toMatchObject({ status: 401, code: 'SIGN_IN' });
    expect(await refused(client, 'POST', '/api/auth/change-password', { currentPassword: 'a', newPassword: 'long enough it is' })).toMatchObject({ status: 401, code: 'SIGN_IN' });
  });

  it('with a cookie that was tampered with is nobody’s', async () => {
    const stolen = await app.signedIn(lab.people.operator);
    const forged = app.nobody();
    const cookie = stolen.cookie.replace(/=(.)/, (_, first: string) => `=${first === 'A' ? 'B' : 'A'}`);
    expect((await forged.raw('GET', '/api/me', { headers: { cookie } })).status).toBe(401);
    // The token that the list of sign-ins shows is no cookie: it is not signed.
    const { body } = await stolen.get<{ token: string }[]>('/api/auth/list-sessions');
    expect((await forged.raw('GET', '/api/me', { headers: { cookie: `tautbook.session_token=${body[0]!.token}` } })).status).toBe(401);
  });

  it('with a password that is not the present one does not change it', async () => {
    expect(await refused(lead, 'POST', '/api/auth/change-password', { currentPassword: 'not the password', newPassword: 'long enough it is' })).toMatchObject({ status: 400, code: 'INVALID_PASSWORD' });
    expect(await refused(lead, 'POST', '/api/auth/change-password', { currentPassword: 'whatever it was', newPassword: 'short' })).toMatchObject({ status: 422, faults: [{ path: 'newPassword' }] });
  });
});

describe('a role', () => {
  it('is not raised by any field that one may send', async () => {
    const person = await app.person('operator', 'Ros Riser');
    const client = app.nobody();
    const extra = { role: 'administrator', closed: false, id: lab.people.administrator.id, emailVerified: true };
    await client.post('/api/auth/sign-in/email', { email: person.email, password: 'a test password', ...extra });
    await client.patch('/api/me', { name: 'Ros Riser', ...extra });
    await client.post('/api/auth/change-password', { currentPassword: 'a test password', newPassword: 'another password', ...extra });
    await app.book.services.desk.requestReset(person.email);
    await client.post('/api/auth/update-user', extra);
    expect((await client.get('/api/me')).body).toMatchObject({ id: person.id, role: 'operator' });
    expect(await refused(client, 'PATCH', `/api/people/${person.id}`, { role: 'administrator' })).toMatchObject({ status: 403, code: 'FORBIDDEN' });
  });

  it('in a study is bounded by the one in the lab', async () => {
    expect(await refused(lead, 'PUT', `/api/studies/${lab.study.id}/members/${lab.people.clinician.id}`, { role: 'lead' })).toMatchObject({ status: 422, code: 'MEMBER_ROLE' });
    expect(await refused(lead, 'PUT', `/api/studies/${lab.study.id}/members/${lab.people.operator.id}`, { role: 'owner' })).toMatchObject({ status: 422, code: 'INVALID', faults: [{ path: 'role' }] });
  });
});

describe('a rig file', () => {
  const imported = (file: unknown) => refused(lead, 'POST', '/api/rigs', { file });
  const heron = heronFile as { bodies: { name: string; motion?: object }[]; cables: object[]; home: object };
  const sliding = heron.bodies.findIndex((body) => body.motion !== undefined);

  it.each([
    ['with a missing axis', { bodies: heron.bodies.map(({ motion, ...body }) => (motion ? { ...body, motion: { ...motion, axis: undefined } } : body)) }, 'MISSING', `bodies.${sliding}.motion.axis`],
    ['with an axis of two numbers', { bodies: heron.bodies.map(({ motion, ...body }) => (motion ? { ...body, motion: { ...motion, axis: [1, 0] } } : body)) }, 'TYPE', `bodies.${sliding}.motion.axis`],
    ['whose home is no unit quaternion', { home: { ...heron.home, q: [0, 0, 0, 0.9] } }, 'QUATERNION_NOT_UNIT', 'home.q'],
    ['with seven cables', { cables: heron.cables.slice(0, 7) }, 'TOO_FEW_CABLES', 'cables'],
    ['with a misspelt field', { tensionMaximum: 25 }, 'UNKNOWN_FIELD', 'tensionMaximum'],
    ['of another format', { format: 'another/1' }, 'FORMAT', 'format'],
  ])('%s is refused with the place of the fault', async (_what, change, code, path) => {
    const told = await imported({ ...heronFile, ...change });
    expect([told.status, told.code]).toEqual([422, 'RIG_FAULTS']);
    expect(told.faults).toContainEqual({ code, path, message: expect.stringMatching(/\.$/) });
  });

  it.each([['null', null], ['a list', []], ['a text', 'heron']])('that is %s is refused', async (_what, file) => {
    expect(await imported(file)).toMatchObject({ status: 422, code: 'RIG_FAULTS' });
  });

  it('that was left out is asked for', async () => {
    expect(await imported(undefined)).toMatchObject({ status: 422, code: 'INVALID', faults: [{ path: 'file' }] });
  });

  it('that is the newest revision already is named', async () => {
    expect(await imported(heronFile)).toMatchObject({ status: 409, code: 'RIG_SAME' });
  });
});

describe('a rig of nine cables', () => {
  const nine = channelNames(9);
  const withoutNinth = nine.filter((name) => name !== 't9_N');
  let deviceKey: string;
  let trialId: string;
  beforeAll(async () => {
    const cables = heronFile['cables'] as { exit: number[] }[];
    const file = { ...heronFile, code: 'nine', cables: [...cables, { ...cables[0]!, exit: [0, 0.3, 0.5] }] };
    const rig = (await lead.post<{ id: string; rigId: string }>('/api/rigs', { file })).body;
    deviceKey = (await administrator.post<{ key: string }>('/api/devices', { name: 'nine', rigId: rig.rigId })).body.key;
    const trial = { taskId: lab.study.tasks[0]!.id, conditionId: lab.study.conditions[0]!.id };
    const plan = { participantId: lab.participantId, rigRevisionId: rig.id, plannedAt: new Date().toISOString(), trials: [trial] };
    trialId = (await lead.post<{ trials: { id: string }[] }>(`/api/studies/${lab.study.id}/sessions`, plan)).body.trials[0]!.id;
  });

  it('is not recorded by a device that leaves out the ninth tension', async () => {
    const client = await LinkClient.open(app.url, deviceKey);
    client.send(hello({ rig: { code: 'nine', revision: 1 }, channels: withoutNinth }));
    expect(await client.next('fault')).toMatchObject({ code: 'CHANNELS', fatal: true, message: expect.stringContaining('t9_N') });
    await client.until(() => client.closed, 'close');
  });

  it('is not filed from a recording file that leaves it out', async () => {
    const row = (t: string) => [t, ...withoutNinth.map((name) => (name === 'qw' ? '1' : '0.5'))].join(',');
    const told = await refused(operator, 'POST', `/api/trials/${trialId}/recording?fileName=eight.csv`, { body: `t_s,${withoutNinth.join(',')}\n${row('0')}\n${row('0.001')}\n`, headers: { 'content-type': 'text/csv' } });
    // t_s and eight columns of the pose and grasp stand before the tensions: the ninth tension is column 18.
    expect(told).toMatchObject({ status: 422, code: 'FILE_FAULTS' });
    expect(told.faults![0]).toEqual({ code: 'CSV_HEADER', path: 'line 1, column 18', message: expect.stringContaining('t9_N') });
    // There are rows; they were not looked at, which is no fault of theirs.
    expect(told.faults!.map(({ code }) => code)).not.toContain('CSV_EMPTY');
  });
});

describe('a device whose key is revoked', () => {
  it('is cut off at once, is not let in again, and takes no trial', async () => {
    const { body: made } = await administrator.post<{ device: Device; key: string }>('/api/devices', { name: 'old bench', rigId: lab.rig.rigId });
    expect(JSON.stringify((await administrator.get('/api/devices')).body)).not.toContain(made.key);
    const device = await BenchDevice.connect(app.url, made.key);
    expect((await administrator.post<Device>(`/api/devices/${made.device.id}/revoke`)).body.state).toBe('revoked');
    expect(await device.hear('fault')).toMatchObject({ code: 'KEY_REVOKED', fatal: true });
    expect(await device.gone).toBe(faultKinds.KEY_REVOKED.closeCode);

    const refusal = await LinkClient.open(app.url, made.key).then(() => null, (error: unknown) => error as UpgradeRefusal);
    expect(refusal).toBeInstanceOf(UpgradeRefusal);
    expect(refusal!.contentType).toBe('application/problem+json');
    expect(refusal!.problem).toMatchObject({ status: 403, code: 'KEY_REVOKED', detail: expect.stringMatching(/\.$/), wayOut: expect.stringMatching(/\.$/) });
    expect((await operator.post(`/api/trials/${lab.trialIds[0]}/arm`, { deviceId: made.device.id })).body).toMatchObject({ status: 422, code: 'DEVICE_UNKNOWN' });
  });
});

describe('a note', () => {
  it('that two people have open is edited by its writer alone, and not over a change from another window', async () => {
    const device = await BenchDevice.connect(app.url, lab.deviceKey);
    const [trialId] = lab.trialIds;
    await app.book.services.sessions.arm(trialId!, lab.deviceId, lab.people.operator);
    await device.begin(trialId!, 'run-1', 500);
    await device.end('run-1', 500);
    await device.leave();
    await app.book.analysis.settled();
    const path = `/api/trials/${trialId}/notes`;
    const { body: note } = await operator.post<{ id: string }>(path, { startS: 0.1, text: 'first', clientKey: randomUUID() });
    expect(await refused(lead, 'PATCH', `/api/notes/${note.id}`, { text: 'mine', onVersion: 1 })).toMatchObject({ status: 403, code: 'NOT_YOURS' });
    await operator.patch(`/api/notes/${note.id}`, { text: 'second', onVersion: 1 });
    expect(await refused(operator, 'PATCH', `/api/notes/${note.id}`, { text: 'from the other window', onVersion: 1 })).toMatchObject({ status: 409, code: 'EDIT_CONFLICT' });
    expect((await operator.get<{ notes: { text: string }[] }>(path)).body.notes[0]!.text).toBe('second');
  });

  it('on a trial that was taken out meanwhile is refused, and what was written stays', async () => {
    const [trialId] = lab.trialIds;
    await operator.put(`/api/trials/${trialId}/outcome`, { outcome: 'void', reason: 'wrong person' });
    await lead.delete(`/api/trials/${trialId}`, { reason: 'wrong person' });
    expect(await refused(operator, 'POST', `/api/trials/${trialId}/notes`, { startS: 0.1, text: 'late', clientKey: randomUUID() })).toMatchObject({ status: 410, code: 'TRIAL_GONE' });
  });

  it.each([
    ['without a text', { text: '  ' }, 'text'],
    ['before the start', { startS: -1 }, 'startS'],
    ['at no number', { startS: 'soon' }, 'startS'],
    ['on cable 0', { cables: [0] }, 'cables.0'],
    ['with a key that is no key', { clientKey: '1' }, 'clientKey'],
  ])('%s is told which field', async (_what, change, path) => {
    const body = { startS: 0.1, text: 'Here.', clientKey: randomUUID(), ...change };
    expect(await refused(operator, 'POST', `/api/trials/${lab.trialIds[1]}/notes`, body)).toMatchObject({ status: 422, code: 'INVALID', faults: [{ path }] });
  });
});

describe('a body', () => {
  const send = (body: string | Uint8Array<ArrayBuffer>, headers: Record<string, string> = json) => refused(lead, 'POST', '/api/rigs', { body, headers });

  it.each([
    ['cut off', '{"file":'],
    ['with a comma too many', '{"file":1,}'],
    ['with NaN', '{"file":NaN}'],
    ['with a null character in a text', '{"file":{},"remark":"a\\u0000b"}'],
    ['with half a character in a text', '{"file":{},"remark":"\\ud800"}'],
    ['with a null character in a name', '{"file":{"a\\u0000":1}}'],
  ])('%s is no JSON', async (_what, body) => {
    expect(await send(body)).toMatchObject({ status: 400, code: 'MALFORMED_JSON' });
  });

  it('in bytes that are no text is refused', async () => {
    expect([400, 422]).toContain((await send(Uint8Array.from([0x7b, 0xff, 0xfe, 0x7d]))).status);
  });

  it('in another encoding or character set is refused', async () => {
    expect(await send('{}', { ...json, 'content-encoding': 'made-up' })).toMatchObject({ status: 400, code: 'MALFORMED_JSON' });
    expect(await send('{}', { 'content-type': 'application/json; charset=made-up' })).toMatchObject({ status: 400, code: 'MALFORMED_JSON' });
  });

  it('of another media type is refused', async () => {
    expect(await send('file=1', { 'content-type': 'application/x-www-form-urlencoded' })).toMatchObject({ status: 415, code: 'MEDIA_TYPE' });
    expect(await send('{"file":1}', { 'content-type': 'text/plain' })).toMatchObject({ status: 415, code: 'MEDIA_TYPE' });
  });

  it('above a megabyte is refused, also at the sign-in', async () => {
    const large = JSON.stringify({ file: 'x'.repeat(1_000_001) });
    expect(await send(large)).toMatchObject({ status: 413, code: 'TOO_LARGE' });
    expect(await refused(app.nobody(), 'POST', '/api/auth/sign-in/email', { body: large, headers: json })).toMatchObject({ status: 413, code: 'TOO_LARGE' });
  });

  it.each([['a list', '[]'], ['a number', '7'], ['null', 'null'], ['a text', '"x"']])('that is %s is told what is missing', async (_what, body) => {
    expect(await refused(lead, 'POST', '/api/studies', { body, headers: json })).toMatchObject({ status: 422, code: 'INVALID' });
  });

  it('that is missing is told what is missing', async () => {
    const told = await refused(lead, 'POST', '/api/studies', { headers: {} });
    expect(told).toMatchObject({ status: 422, code: 'INVALID' });
    expect(told.faults!.map(({ path }) => path)).toEqual(expect.arrayContaining(['code', 'title', 'conditions', 'tasks']));
  });

  it('cannot reach into how objects work', async () => {
    await refused(lead, 'POST', '/api/rigs', { body: '{"file":{"__proto__":{"polluted":true},"constructor":{"prototype":{"polluted":true}}}}', headers: json });
    expect(({} as { polluted?: boolean }).polluted).toBeUndefined();
  });

  it('that breaks off leaves nothing, and the server goes on', async () => {
    const before = await contents();
    await new Promise<void>((resolve) => {
      const half = request(`${app.url}/api/rigs`, { method: 'POST', headers: { ...json, cookie: lead.cookie, 'content-length': 1000 } });
      half.on('error', () => resolve());
      half.write('{"file":', () => half.destroy());
    });
    expect((await lead.get('/api/me')).status).toBe(200);
    expect(await contents()).toEqual(before);
  });
});

describe('an address', () => {
  const stranger = '0190a000-0000-7000-8000-000000000000';

  it.each([
    ['/api/studies/:id'], ['/api/studies/:id/sessions'], ['/api/sessions/:id'], ['/api/sessions/:id/log'], ['/api/trials/:id'], ['/api/trials/:id/notes'], ['/api/trials/:id/flags'],
    ['/api/trials/:id/recording.csv'], ['/api/recordings/:id/window?from=0&to=1'], ['/api/notes/:id/versions'], ['/api/rigs/:id'], ['/api/rig-revisions/:id'],
  ])('%s of something that is not there, or cannot be, says so', async (path) => {
    for (const id of [stranger, 'x', '1', '..%2F..', '%00', "';--", 'x'.repeat(5000)]) {
      expect((await refused(lead, 'GET', path.replace(':id', id))).status, id.slice(0, 20)).toBe(404);
    }
  });

  it('with broken escapes says so', async () => {
    expect(await refused(lead, 'GET', '/api/rigs/%E0%A4%A')).toMatchObject({ status: 404 });
  });

  it.each([
    ['a span that ends before it starts', 'from=2&to=1', 'SPAN_ORDER', undefined],
    ['no span', '', 'INVALID', 'from'],
    ['a span of words', 'from=a&to=b', 'INVALID', 'from'],
    ['a span of infinity', 'from=0&to=Infinity', 'INVALID', 'to'],
    ['a million buckets', 'from=0&to=1&buckets=1000000', 'INVALID', 'buckets'],
    ['two starts', 'from=0&from=1&to=2', 'INVALID', 'from'],
  ])('of a recording with %s is told what is wrong', async (_what, query, code, path) => {
    const { rows } = await app.open.db.execute('select id from recordings limit 1') as unknown as { rows: { id: string }[] };
    const told = await refused(operator, 'GET', `/api/recordings/${rows[0]!.id}/window?${query}`);
    expect([told.status, told.code]).toEqual([422, code]);
    if (path) expect(told.faults!.map((fault) => fault.path)).toContain(path);
  });
});

it('logs no warning while all this happens as expected', () => {
  expect(app.logged).toEqual([]);
});

/** Whatever a body or a query holds, the server answers: with what was asked for or with a problem, never with a fault of its own. */
import fc from 'fast-check';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { allRoutes, type RouteId } from '@shared/api';
import type { SignedIn } from '@server/auth';
import { makeMiniLab, startApp } from '../support/app';
import { BenchDevice } from '../support/bench-device';
import type { HttpClient } from '../support/http-client';
import { calls, type Ground } from './access-calls';
import { access } from './access-table';

const seed = 20_260_514;
const runs = 25;
const unlimited = { windowMs: 1000, limit: 100_000, failuresOnly: false };

let ground: Ground;
let lead: HttpClient;
let administrator: HttpClient;

beforeAll(async () => {
  const app = await startApp({ rateLimits: { signIn: unlimited, mail: unlimited } });
  const lab = await makeMiniLab(app);
  const [trialId] = lab.trialIds;
  const device = await BenchDevice.connect(app.url, lab.deviceKey);
  await app.book.services.sessions.arm(trialId!, lab.deviceId, lab.people.lead);
  await device.begin(trialId!, 'run-1', 500);
  await device.end('run-1', 500);
  await device.leave();
  await app.book.analysis.settled();
  const { recording } = await app.book.services.sessionReader.getTrial(trialId!, { studyId: lab.study.id, role: 'lead', blind: false });
  ground = { app, lab, spare: await app.person('operator', 'spare'), recordingId: recording!.id, recordedTrial: trialId! };
  [lead, administrator] = [await app.signedIn(lab.people.lead), await app.signedIn(lab.people.administrator)];
});
afterAll(() => ground.app.close());

/** Somebody whom the route lets in, so that the input is looked at. */
const callerOf = (id: RouteId): [HttpClient, SignedIn] =>
  (access.get(id)?.['lead in'] === 'yes' ? [lead, ground.lab.people.lead] : [administrator, ground.lab.people.administrator]);

/** Values that break naive code: deep and wide things, texts of every script, numbers at the edges, names that objects have themselves. */
const anyJson = fc.oneof(
  fc.jsonValue({ maxDepth: 4 }),
  fc.constantFrom<unknown>(0, -0, -1, 1e308, 1e-320, 2 ** 53, '', ' ', '\u202e', 'x'.repeat(5000), '1e999', [], {}, [[[]]], { __proto__: null, toString: 1 }, null, true),
  fc.string({ unit: 'grapheme', maxLength: 60 }),
);

/** A body that is right but for one place in it, or none of it right. */
const bodyNear = (right: unknown) => fc.oneof(anyJson, typeof right === 'object' && right !== null
  ? fc.tuple(fc.constantFrom(...Object.keys(right)), anyJson).map(([name, value]) => ({ ...right, [name]: value }))
  : anyJson);

async function answered(response: Response): Promise<void> {
  expect(response.status).toBeLessThan(500);
  if (response.status >= 400) expect(response.headers.get('content-type')).toContain('application/problem+json');
  await response.arrayBuffer();
}

const addressOf = (path: string, params: Record<string, string> = {}) => path.replace(/:(\w+)/g, (_, name: string) => params[name]!);
const withBody = allRoutes.filter((route) => route.body !== undefined);
const withQuery = allRoutes.filter((route) => route.query !== undefined && route.method === 'GET');

describe('any body', () => {
  it.each(withBody.map((route) => [route.id, route] as const))('is answered by %s', async (id, route) => {
    const [client, person] = callerOf(id as RouteId);
    const target = await calls[id as RouteId](ground, person);
    await fc.assert(fc.asyncProperty(bodyNear(target.body), async (body) => {
      await answered(await client.raw(route.method, addressOf(route.path, target.params), { body: JSON.stringify(body), headers: { 'content-type': 'application/json' } }));
    }), { seed, numRuns: runs });
    expect(ground.app.logged).toEqual([]);
  });
});

describe('any query', () => {
  it.each(withQuery.map((route) => [route.id, route] as const))('is answered by %s', async (id, route) => {
    const [client, person] = callerOf(id as RouteId);
    const { params, query = '' } = await calls[id as RouteId](ground, person);
    const names = [...new URLSearchParams(query).keys(), 'before', 'limit', 'buckets', 'from', 'to'];
    const text = fc.oneof(fc.string({ unit: 'grapheme', maxLength: 30 }), fc.double().map(String), fc.integer().map(String), fc.constantFrom('', 'NaN', '1e400', '0x10', '[]', '%', '\u0000'));
    await fc.assert(fc.asyncProperty(fc.array(fc.tuple(fc.constantFrom(...names), text), { maxLength: 5 }), async (pairs) => {
      await answered(await client.raw('GET', `${addressOf(route.path, params)}?${new URLSearchParams([...new URLSearchParams(query), ...pairs])}`));
    }), { seed, numRuns: runs });
    expect(ground.app.logged).toEqual([]);
  });
});

describe('the same twice at once', () => {
  /** Status, and the code of a refusal. */
  const both = async (send: () => Promise<{ status: number; body: { code?: string } }>) =>
    (await Promise.all([send(), send()])).map(({ status, body }) => (status === 200 ? '200' : `${status} ${body.code}`)).sort();

  it('makes one study, one participant, one person', async () => {
    const study = { code: 'TWICE', title: 'Twice', conditions: [{ blindCode: 'A', label: 'one' }], tasks: [{ code: 'x', title: 'X' }] };
    expect(await both(() => lead.post('/api/studies', study))).toEqual(['200', '409 STUDY_CODE_TAKEN']);
    expect(await both(() => lead.post(`/api/studies/${ground.lab.study.id}/participants`, { code: 'K-777' }))).toEqual(['200', '409 PARTICIPANT_TAKEN']);
    // Inviting somebody again sends another letter, so both go through; there is one person all the same.
    expect(await both(() => administrator.post('/api/people', { name: 'Twin', email: 'twin@lab.example', role: 'operator' }))).toEqual(['200', '200']);
    const { body } = await administrator.get<{ people: { email: string }[] }>('/api/people');
    expect(body.people.filter(({ email }) => email === 'twin@lab.example')).toHaveLength(1);
  });

  /** Past the guard both: each of two would take away the last but one. */
  const oneOf = async (leave: () => Promise<unknown>[]) => (await Promise.allSettled(leave())).map((end) => (end.status === 'fulfilled' ? 'done' : (end.reason as { code: string }).code)).sort();

  it('leaves the lab an administrator', async () => {
    const { people } = ground.app.book.services;
    const second = await ground.app.person('administrator', 'second administrator');
    const first = ground.lab.people.administrator;
    for (const { id, role } of await people.list()) if (role === 'administrator' && id !== second.id && id !== first.id) await people.change(id, { role: 'operator' });
    expect(await oneOf(() => [people.change(second.id, { role: 'operator' }), people.change(first.id, { closed: true })])).toEqual(['LAST_ADMINISTRATOR', 'done']);
    expect((await people.list()).filter(({ role, state }) => role === 'administrator' && state !== 'closed')).toHaveLength(1);
  });

  it('leaves the study a lead', async () => {
    const { studies } = ground.app.book.services;
    const { study, people: { lead: first } } = ground.lab;
    const second = await ground.app.person('lead', 'second lead');
    await studies.setMember(study.id, second.id, 'lead', false);
    expect(await oneOf(() => [studies.setMember(study.id, second.id, 'operator', false), studies.removeMember(study.id, first.id)])).toEqual(['LAST_LEAD', 'done']);
  });

  it('logs no warning', () => {
    expect(ground.app.logged).toEqual([]);
  });
});

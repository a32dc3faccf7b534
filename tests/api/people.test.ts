/** Sign-in, the first administrator, invitations, roles and closing, as a browser meets them. */
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import type { MailItem } from '@shared/api/people';
import { startApp, testPassword, type TestApp } from '../support/app';

let app: TestApp;
beforeAll(async () => { app = await startApp(); });
afterAll(() => app.close());

const linkIn = (text: string) => new URL(/https?:\S+/.exec(text)![0]);

describe('the first visit', () => {
  it('asks for the one-time code and makes one administrator, once', async () => {
    const visitor = app.nobody();
    expect((await visitor.get('/api/entrance')).body).toEqual({ setupNeeded: true, demo: [] });
    const code = await app.book.setupCode();
    const entry = { name: 'Ada Example', email: 'Ada@Lab.example', password: 'correct horse battery' };

    const wrong = await visitor.post('/api/setup', { ...entry, code: 'AAAA-AAAA-AAAA' });
    expect([wrong.status, wrong.body['code']]).toEqual([403, 'SETUP_CODE']);
    const short = await visitor.post('/api/setup', { ...entry, code, password: 'short' });
    expect([short.status, short.body['code']]).toEqual([422, 'INVALID']);

    const twice = await Promise.all([visitor.post('/api/setup', { ...entry, code }), visitor.post('/api/setup', { ...entry, email: 'eve@lab.example', code })]);
    expect(twice.map(({ status }) => status).sort()).toEqual([200, 403]);
    expect((await visitor.post('/api/setup', { ...entry, email: 'late@lab.example', code })).body['code']).toBe('SETUP_DONE');
    expect(await app.book.setupCode()).toBeNull();
    expect((await visitor.get('/api/entrance')).body['setupNeeded']).toBe(false);
  });
});

describe('sign-in', () => {
  it('lets in with the right password, keeps out with a wrong one, and ends at sign-out', async () => {
    const person = await app.person('operator', 'Olu Operator');
    const client = app.nobody();
    expect((await client.get('/api/me')).status).toBe(401);
    expect((await client.signIn(person.email, 'not the password')).status).toBe(401);
    expect((await client.signIn('nobody@lab.example', testPassword)).status).toBe(401);
    expect((await client.get('/api/me')).body).toMatchObject({ code: 'SIGN_IN', status: 401 });

    expect((await client.signIn(person.email, testPassword)).status).toBe(200);
    expect((await client.get('/api/me')).body).toMatchObject({ email: person.email, role: 'operator', memberships: [], demo: false });
    await client.post('/api/auth/sign-out', {});
    expect((await client.get('/api/me')).status).toBe(401);
  });

  it('ends when it expires', async () => {
    const person = await app.person('operator', 'Ellis Expired');
    const client = await app.signedIn(person);
    await app.open.db.execute(`update sign_ins set expires_at = now() - interval '1 second' where user_id = '${person.id}'`);
    const { status, body } = await client.get('/api/me');
    expect([status, body['code']]).toEqual([401, 'SIGN_IN']);
  });

  it('cannot be made by oneself, nor with a role of one’s choice', async () => {
    const client = app.nobody();
    const signUp = await client.post('/api/auth/sign-up/email', { name: 'Mallory', email: 'mallory@lab.example', password: testPassword, role: 'administrator' });
    expect(signUp.status).toBeGreaterThanOrEqual(400);
    expect((await client.signIn('mallory@lab.example', testPassword)).status).toBe(401);

    const person = await app.person('operator', 'Ros Raiser');
    const raised = await app.signedIn(person);
    await raised.post('/api/auth/update-user', { role: 'administrator' });
    await raised.patch('/api/me', { name: 'Ros Raiser', role: 'administrator' });
    expect((await raised.get('/api/me')).body['role']).toBe('operator');
  });

  it('shows one’s open sign-ins and ends one of them', async () => {
    const person = await app.person('lead', 'Lin Lead');
    const [here, there] = [await app.signedIn(person), await app.signedIn(person)];
    const { body: open } = await here.get<{ token: string }[]>('/api/auth/list-sessions');
    expect(open).toHaveLength(2);
    const { body: current } = await here.get<{ session: { token: string } }>('/api/auth/get-session');
    const other = open.find(({ token }) => token !== current.session.token)!;
    expect((await here.post('/api/auth/revoke-session', { token: other.token })).status).toBe(200);
    expect((await there.get('/api/me')).status).toBe(401);
    expect((await here.get('/api/me')).status).toBe(200);
  });

  it('refuses changes that a page of another site asks for', async () => {
    const client = await app.signedIn(await app.person('operator', 'Cas Crossed'));
    const response = await client.raw('PATCH', '/api/me', { body: '{"name":"X"}', headers: { 'content-type': 'application/json', origin: 'https://elsewhere.example' } });
    expect([response.status, (await response.json() as { code: string }).code]).toEqual([403, 'ORIGIN']);
    expect((await client.raw('POST', '/api/auth/sign-out', { body: '{}', headers: { 'content-type': 'application/json', origin: 'https://elsewhere.example' } })).status).toBe(403);
  });
});

describe('people of the lab', () => {
  it('are invited by mail, choose a password with the link, once', async () => {
    const administrator = await app.signedIn(await app.person('administrator', 'Ari Admin'));
    const invited = await administrator.post('/api/people', { name: 'Noor New', email: 'Noor@lab.example', role: 'clinician' });
    expect(invited.body).toMatchObject({ email: 'noor@lab.example', role: 'clinician', state: 'invited' });

    const { body: outbox } = await administrator.get<{ smtp: boolean; mail: MailItem[] }>('/api/outbox');
    expect(outbox.smtp).toBe(false);
    const letter = outbox.mail.find(({ to }) => to === 'noor@lab.example')!;
    expect(letter.state).toBe('outbox');
    const link = linkIn(letter.text);
    expect([link.origin, link.pathname]).toEqual([app.url, '/reset']);

    const newcomer = app.nobody();
    const token = link.searchParams.get('token');
    expect((await newcomer.post('/api/auth/reset-password', { token, newPassword: 'too short' })).body).toMatchObject({ code: 'INVALID', faults: [{ path: 'newPassword' }] });
    expect((await newcomer.post('/api/auth/reset-password', { token, newPassword: testPassword })).status).toBe(200);
    expect((await newcomer.post('/api/auth/reset-password', { token, newPassword: `${testPassword} 2` })).body).toMatchObject({ status: 400, code: 'INVALID_TOKEN' });
    expect((await newcomer.signIn('noor@lab.example', testPassword)).status).toBe(200);

    const again = await administrator.post('/api/people', { name: 'Noor New', email: 'noor@lab.example', role: 'clinician' });
    expect([again.status, again.body['code']]).toEqual([409, 'EMAIL_TAKEN']);
  });

  it('get a new password by mail, and every sign-in with the old one ends', async () => {
    const person = await app.person('operator', 'Fay Forgetful');
    const before = await app.signedIn(person);
    const visitor = app.nobody();
    const asked = await visitor.post('/api/auth/request-password-reset', { email: person.email, redirectTo: '/reset' });
    const strange = await visitor.post('/api/auth/request-password-reset', { email: 'unknown@lab.example', redirectTo: '/reset' });
    expect([asked.status, asked.body]).toEqual([strange.status, strange.body]);

    const [letter] = (await app.book.services.post.latest(1)).filter(({ recipient }) => recipient === person.email);
    const token = linkIn(letter!.text).searchParams.get('token');
    expect((await visitor.post('/api/auth/reset-password', { token, newPassword: 'another password' })).status).toBe(200);
    expect((await before.get('/api/me')).status).toBe(401);
    expect((await visitor.signIn(person.email, testPassword)).status).toBe(401);
    expect((await visitor.signIn(person.email, 'another password')).status).toBe(200);
  });

  it('lose access at once when they are closed, and cannot sign in again', async () => {
    const administrator = await app.signedIn(await app.person('administrator', 'Bo Admin'));
    const person = await app.person('operator', 'Kim Closed');
    const client = await app.signedIn(person);
    expect((await administrator.patch(`/api/people/${person.id}`, { closed: true })).body['state']).toBe('closed');
    expect((await client.get('/api/me')).status).toBe(401);
    const refused = await client.signIn(person.email, testPassword);
    expect([refused.status, refused.body['code']]).toEqual([403, 'PERSON_CLOSED']);
    await administrator.patch(`/api/people/${person.id}`, { closed: false });
    expect((await client.signIn(person.email, testPassword)).status).toBe(200);
  });

  it('always include an administrator', async () => {
    const { services } = app.book;
    const administrators = (await services.people.list()).filter(({ role, state }) => role === 'administrator' && state !== 'closed');
    const [last, ...others] = administrators;
    for (const other of others) await services.people.change(other.id, { closed: true });
    await expect(services.people.change(last!.id, { closed: true })).rejects.toMatchObject({ code: 'LAST_ADMINISTRATOR' });
    await expect(services.people.change(last!.id, { role: 'lead' })).rejects.toMatchObject({ code: 'LAST_ADMINISTRATOR' });
    for (const other of others) await services.people.change(other.id, { closed: false });
  });

  it('leave a trail of what they changed, without secrets', async () => {
    const administrator = await app.signedIn(await app.person('administrator', 'Cleo Admin'));
    await administrator.post('/api/people', { name: 'Pat Traced', email: 'pat@lab.example', role: 'operator' });
    const { body } = await administrator.get<{ entries: { who: string; action: string; subject: string }[] }>('/api/audit');
    const person = (await app.book.services.people.list()).find(({ email }) => email === 'pat@lab.example')!;
    expect(body.entries[0]).toMatchObject({ who: 'Cleo Admin', action: 'people.invite', subject: person.id });
    expect(body.entries.map(({ action }) => action)).toEqual(expect.arrayContaining(['auth.signIn', 'setup.make', 'people.change', 'auth.passwordReset']));
    expect(JSON.stringify(body)).not.toContain(testPassword);
  });
});

it('logs no warning while all this happens as expected', () => {
  expect(app.logged).toEqual([]);
});

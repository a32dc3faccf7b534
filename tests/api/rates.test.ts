/** How often one address may try: guessing is slowed down, working is not. */
import { afterEach, describe, expect, it } from 'vitest';
import { defaultRateLimits } from '@server/api';
import { startApp, testPassword, type TestApp } from '../support/app';

let app: TestApp;
afterEach(() => app.close());

const minute = 60_000;
const three = { signIn: { windowMs: minute, limit: 3, failuresOnly: true }, mail: { windowMs: minute, limit: 2, failuresOnly: false } };

describe('attempts to sign in', () => {
  it('that fail are counted by address, whoever they name; then even the right password has to wait', async () => {
    app = await startApp({ rateLimits: three });
    const person = await app.person('operator', 'Olu Operator');
    const visitor = app.nobody();
    for (const email of [person.email, 'stranger@lab.example', person.email]) expect((await visitor.signIn(email, 'not the password')).status).toBe(401);
    const late = await visitor.signIn(person.email, testPassword);
    expect(late.body).toMatchObject({ status: 429, code: 'TOO_MANY', detail: expect.stringMatching(/\.$/), wayOut: expect.stringMatching(/\.$/) });
    expect(late.headers.get('content-type')).toContain('application/problem+json');
    expect(Number(late.headers.get('retry-after'))).toBeGreaterThan(0);
    // One budget for every way to guess.
    expect((await visitor.post('/api/setup', { code: 'AAAA' })).status).toBe(429);
    expect((await visitor.post('/api/auth/reset-password', { token: 'x', newPassword: testPassword })).status).toBe(429);
    // What is no guess goes on.
    expect((await visitor.get('/api/entrance')).status).toBe(200);
  });

  it('that succeed are not counted: a whole lab may sit behind one address', async () => {
    app = await startApp({ rateLimits: three });
    const person = await app.person('operator', 'Olu Operator');
    for (let i = 0; i < 8; i += 1) expect((await app.nobody().signIn(person.email, testPassword)).status).toBe(200);
  });

  it('cannot hide behind a made-up address, but are told apart behind a trusted proxy', async () => {
    const tries = async () => {
      const statuses: number[] = [];
      for (let i = 0; i < 5; i += 1) {
        const body = JSON.stringify({ email: 'stranger@lab.example', password: 'not the password' });
        statuses.push((await app.nobody().raw('POST', '/api/auth/sign-in/email', { body, headers: { 'content-type': 'application/json', 'x-forwarded-for': `198.51.100.${i}` } })).status);
      }
      return statuses;
    };
    app = await startApp({ rateLimits: three });
    expect(await tries()).toEqual([401, 401, 401, 429, 429]);
    expect(app.logged).toEqual([]);
    await app.close();
    app = await startApp({ rateLimits: three, env: { TRUSTED_PROXIES: '1' } });
    expect(await tries()).toEqual([401, 401, 401, 401, 401]);
  });
});

it('letters that can be asked for are few, for known and unknown addresses alike', async () => {
  app = await startApp({ rateLimits: three });
  const ask = async () => (await app.nobody().post('/api/auth/request-password-reset', { email: 'stranger@lab.example' })).status;
  expect([await ask(), await ask(), await ask()]).toEqual([200, 200, 429]);
});

it('by default twenty wrong passwords and ten letters a quarter of an hour are taken', async () => {
  app = await startApp();
  expect(defaultRateLimits).toEqual({ signIn: { windowMs: 900_000, limit: 20, failuresOnly: true }, mail: { windowMs: 900_000, limit: 10, failuresOnly: false } });
});

/** Letters, as a mail server gets them (smtp-server as the peer) and as the local outbox keeps them. */
import { afterEach, describe, expect, it } from 'vitest';
import type { MailItem } from '@shared/api/people';
import { startApp, testPassword, type TestApp } from '../support/app';
import { type MailPeer, type MailPeerOptions, openMailPeer } from '../support/mail-peer';

const closing: (() => Promise<void>)[] = [];
afterEach(async () => { for (const close of closing.splice(0).reverse()) await close(); });

async function start(env: Record<string, string> = {}): Promise<TestApp> {
  const app = await startApp({ env });
  closing.push(() => app.close());
  return app;
}

async function startWithPeer(options: MailPeerOptions = {}, more: Record<string, string> = {}): Promise<{ app: TestApp; peer: MailPeer }> {
  const peer = await openMailPeer(options);
  closing.push(() => peer.close());
  return { app: await start({ ...peer.env, ...more }), peer };
}

const linkIn = (text: string) => new URL(/https?:[^\s"<]+/.exec(text)![0].replaceAll('&#38;', '&'));
const outboxOf = async (app: TestApp) => {
  const administrator = await app.signedIn(await app.person('administrator', 'Ari Admin'));
  return (await administrator.get<{ smtp: boolean; mail: MailItem[] }>('/api/outbox')).body;
};

describe('with a mail server', () => {
  it('a forgotten password is reset with the link in the letter, once', async () => {
    const { app, peer } = await startWithPeer({ user: 'book', password: 'post office' }, { PUBLIC_URL: 'http://book.lab.example' });
    const person = await app.person('operator', 'Fay Forgetful');
    const visitor = app.nobody();
    expect((await visitor.post('/api/auth/request-password-reset', { email: person.email.toUpperCase() })).status).toBe(200);
    await expect.poll(() => peer.received.length, { timeout: 20_000 }).toBe(1);

    const [letter] = peer.received;
    expect(letter).toMatchObject({ from: 'book@lab.example', to: [person.email], user: 'book' });
    expect(letter!.headers.get('from')).toBe('Lab book <book@lab.example>');
    expect(letter!.headers.get('subject')).toBe('Choose a new Tautbook password');
    const [text, html] = letter!.texts;
    const link = linkIn(text!);
    // The address that people type, not the one that the server listens on.
    expect([link.origin, link.pathname]).toEqual(['http://book.lab.example', '/reset']);
    expect(linkIn(html!).href).toBe(link.href);

    const token = link.searchParams.get('token');
    expect((await visitor.post('/api/auth/reset-password', { token, newPassword: 'another password' })).status).toBe(200);
    expect((await visitor.post('/api/auth/reset-password', { token, newPassword: 'a third password' })).body).toMatchObject({ status: 400, code: 'INVALID_TOKEN' });
    expect((await visitor.signIn(person.email, 'another password')).status).toBe(200);
    // Who reads the outbox finds that it was sent, and no link that still works.
    await expect.poll(async () => (await app.book.services.post.latest(1))[0]?.state).toBe('sent');
    const outbox = await outboxOf(app);
    expect(outbox.smtp).toBe(true);
    expect(JSON.stringify(outbox)).not.toContain(token);
  });

  it('an unknown address gets no letter and the same answer, as fast: nobody waits for the mail server', async () => {
    let takeIt = (): void => undefined;
    const { app, peer } = await startWithPeer({ after: new Promise((resolve) => { takeIt = resolve; }) });
    const person = await app.person('operator', 'Fay Forgetful');
    const known = await app.nobody().post('/api/auth/request-password-reset', { email: person.email });
    const unknown = await app.nobody().post('/api/auth/request-password-reset', { email: 'stranger@lab.example' });
    expect([known.status, known.body]).toEqual([unknown.status, unknown.body]);
    // Answered while the mail server still holds the letter.
    expect(peer.received).toEqual([]);
    takeIt();
    await expect.poll(() => peer.received.map(({ to }) => to), { timeout: 20_000 }).toEqual([[person.email]]);
  });

  it('letters on their way are waited for when the server stops', async () => {
    let takeIt = (): void => undefined;
    const { app, peer } = await startWithPeer({ after: new Promise((resolve) => { takeIt = resolve; }) });
    const person = await app.person('operator', 'Fay Forgetful');
    await app.nobody().post('/api/auth/request-password-reset', { email: person.email });
    const stopping = app.book.close();
    takeIt();
    await stopping;
    expect(peer.received).toHaveLength(1);
    expect((await app.book.services.post.latest(1))[0]).toMatchObject({ state: 'sent', recipient: person.email });
  });

  it.each([
    ['refuses the mailbox', async () => startWithPeer({ refuse: true })],
    ['refuses the password', async () => startWithPeer({ user: 'book', password: 'post office' }, { SMTP_PASSWORD: 'wrong' })],
    ['does not answer', async () => ({ app: await start({ SMTP_HOST: '127.0.0.1', SMTP_PORT: '1' }) })],
  ])('one that %s breaks nothing: the person is invited, and the outbox keeps the letter and says that it failed', async (_what, open) => {
    const { app } = await open();
    const administrator = await app.signedIn(await app.person('administrator', 'Bo Admin'));
    expect((await administrator.post('/api/people', { name: 'Noor New', email: 'noor@lab.example', role: 'operator' })).body).toMatchObject({ state: 'invited' });
    const { body } = await administrator.get<{ mail: MailItem[] }>('/api/outbox');
    expect(body.mail[0]).toMatchObject({ to: 'noor@lab.example', state: 'failed' });
    // The administrator can hand the link over by other means.
    const token = linkIn(body.mail[0]!.text).searchParams.get('token');
    expect((await app.nobody().post('/api/auth/reset-password', { token, newPassword: testPassword })).status).toBe(200);
    expect(app.logged).toMatchObject([{ msg: 'a mail could not be sent' }]);
  });
});

describe('without a mail server', () => {
  it('letters stay in the outbox, newest first, with links that work', async () => {
    const app = await start();
    const person = await app.person('operator', 'Fay Forgetful');
    await app.nobody().post('/api/auth/request-password-reset', { email: person.email });
    await app.nobody().post('/api/auth/request-password-reset', { email: 'stranger@lab.example' });
    await expect.poll(async () => (await app.book.services.post.latest(9)).map(({ recipient, state }) => [recipient, state])).toEqual([[person.email, 'outbox']]);
    const { smtp, mail } = await outboxOf(app);
    expect(smtp).toBe(false);
    const link = linkIn(mail[0]!.text);
    expect(link.origin).toBe(app.url);
    expect((await app.nobody().post('/api/auth/reset-password', { token: link.searchParams.get('token'), newPassword: 'another password' })).status).toBe(200);
  });

  it('a person whose access is closed gets no letter, and a name with markup stays a name', async () => {
    const app = await start();
    const closed = await app.person('operator', 'Kim Closed');
    await app.book.services.people.change(closed.id, { closed: true });
    expect((await app.nobody().post('/api/auth/request-password-reset', { email: closed.email })).status).toBe(200);
    const administrator = await app.signedIn(await app.person('administrator', 'Bo Admin'));
    await administrator.post('/api/people', { name: '<b>Bea</b>', email: 'bea@lab.example', role: 'operator' });
    const letters = await app.book.services.post.latest(9);
    expect(letters.map(({ recipient }) => recipient)).toEqual(['bea@lab.example']);
    expect(letters[0]!.html).not.toContain('<b>Bea');
    expect(letters[0]!.text).toContain('<b>Bea</b>');
  });

  it('a link is too old after its hour', async () => {
    const app = await start();
    const person = await app.person('operator', 'Fay Forgetful');
    await app.nobody().post('/api/auth/request-password-reset', { email: person.email });
    await expect.poll(async () => (await app.book.services.post.latest(1)).length).toBe(1);
    const token = linkIn((await app.book.services.post.latest(1))[0]!.text).searchParams.get('token');
    const { rows } = await app.open.db.execute('select extract(epoch from expires_at - now()) as left from verifications') as unknown as { rows: { left: string }[] };
    expect(Number(rows[0]!.left)).toBeGreaterThan(3500);
    expect(Number(rows[0]!.left)).toBeLessThanOrEqual(3600);
    await app.open.db.execute("update verifications set expires_at = now() - interval '1 second'");
    expect((await app.nobody().post('/api/auth/reset-password', { token, newPassword: 'another password' })).body).toMatchObject({ code: 'INVALID_TOKEN' });
    expect((await app.nobody().signIn(person.email, testPassword)).status).toBe(200);
  });
});

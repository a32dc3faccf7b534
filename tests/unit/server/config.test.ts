/** The environment, as the table in README.md promises it. */
import { readFileSync } from 'node:fs';
import { describe, expect, it } from 'vitest';
import { loadConfig } from '@server/config';
import { StartRefusal } from '@server/start-refusal';

const readme = readFileSync(new URL('../../../README.md', import.meta.url), 'utf8');

const refusalOf = (env: Record<string, string>): StartRefusal => {
  try {
    loadConfig(env);
  } catch (error) {
    return error as StartRefusal;
  }
  throw new Error('was taken');
};

describe('the settings in the environment', () => {
  it('have the defaults that the table of README.md names', () => {
    const config = loadConfig({});
    expect(config).toMatchObject({ port: 4680, host: '127.0.0.1', databaseUrl: undefined, publicUrl: undefined, authSecret: undefined, trustedProxies: 0, logLevel: 'info', smtp: undefined });
    expect(config.dataDir).toMatch(/[/\\]\.data$/);
    expect(readme).toContain('| `PORT`, `HOST` | 4680, 127.0.0.1 |');
    expect(readme).toContain('| `DATA_DIR` | `.data` |');
    expect(readme).toContain('| `TRUSTED_PROXIES` | 0 |');
    expect(readme).toContain('| `LOG_LEVEL` | info |');
  });

  it('that are empty count as unset, as a compose file writes them', () => {
    expect(loadConfig({ PORT: '', DATABASE_URL: '', SMTP_HOST: '', AUTH_SECRET: '', PUBLIC_URL: '' })).toEqual(loadConfig({}));
  });

  it('are taken as written, an address without its closing slash', () => {
    const secret = 'thirty-two characters or even more';
    const config = loadConfig({ PORT: '8080', HOST: '0.0.0.0', DATA_DIR: '/srv/book', DATABASE_URL: 'postgresql://book@db/book', PUBLIC_URL: 'https://book.lab.example/', AUTH_SECRET: secret, TRUSTED_PROXIES: '2', LOG_LEVEL: 'warn' });
    expect(config).toMatchObject({ port: 8080, host: '0.0.0.0', dataDir: '/srv/book', databaseUrl: 'postgresql://book@db/book', publicUrl: 'https://book.lab.example', authSecret: secret, trustedProxies: 2, logLevel: 'warn' });
  });

  it('send mail only when there is a mail server to send it to', () => {
    expect(loadConfig({ SMTP_USER: 'book', SMTP_PASSWORD: 'x' }).smtp).toBeUndefined();
    expect(loadConfig({ SMTP_HOST: 'mail.lab.example', SMTP_PORT: '465', SMTP_SECURE: 'true', SMTP_USER: 'book', SMTP_PASSWORD: 'x' }).smtp)
      .toEqual({ host: 'mail.lab.example', port: 465, secure: true, user: 'book', password: 'x' });
    expect(loadConfig({ SMTP_HOST: 'mail.lab.example' }).smtp).toEqual({ host: 'mail.lab.example', port: 587, secure: false, user: undefined, password: undefined });
  });

  it.each([
    ['PORT', '70000'], ['PORT', '-1'], ['PORT', '80.5'], ['PORT', 'http'],
    ['DATABASE_URL', 'mysql://book@db/book'], ['DATABASE_URL', 'db'],
    ['PUBLIC_URL', 'book.lab.example'], ['PUBLIC_URL', 'ftp://book.lab.example'],
    ['AUTH_SECRET', 'too short'], ['TRUSTED_PROXIES', 'yes'], ['LOG_LEVEL', 'loud'], ['SMTP_PORT', '0'], ['SMTP_SECURE', 'perhaps'],
  ])('%s=%s is refused by name, with a way out', (name, value) => {
    const refusal = refusalOf({ [name]: value });
    expect(refusal).toBeInstanceOf(StartRefusal);
    expect(refusal.code).toBe('CONFIG');
    expect(refusal.message).toContain(name);
    expect(refusal.wayOut).toMatch(/\.$/);
  });

  it('that are wrong are all named at once, and secrets among them are not repeated', () => {
    const { message } = refusalOf({ PORT: 'x', LOG_LEVEL: 'loud', AUTH_SECRET: 'my short secret' });
    for (const name of ['PORT', 'LOG_LEVEL', 'AUTH_SECRET']) expect(message).toContain(name);
    expect(message).not.toContain('my short secret');
  });
});

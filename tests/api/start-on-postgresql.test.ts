/** The real command on an existing PostgreSQL, where the tests have one: several servers on one database, and none on newer data. */
import { randomUUID } from 'node:crypto';
import pg from 'pg';
import { afterAll, afterEach, beforeAll, describe, expect, it } from 'vitest';
import { HttpClient } from '../support/http-client';
import { type Program, startProgram } from '../support/program';

const server = process.env['TEST_DATABASE_URL'] ?? '';
const patience = 120_000;

describe.runIf(server !== '')('npm start on PostgreSQL', () => {
  const name = `tautbook_start_${randomUUID().replaceAll('-', '')}`;
  const running: Program[] = [];
  const start = () => {
    const url = new URL(server);
    url.pathname = `/${name}`;
    const program = startProgram(process.execPath, ['--import', 'tsx', 'server/cli/start.ts'], { env: { DATABASE_URL: url.href, PORT: '0' } });
    running.push(program);
    return program;
  };
  const asOwner = async (database: string, statement: string) => {
    const url = new URL(server);
    url.pathname = database;
    const client = new pg.Client({ connectionString: url.href });
    await client.connect();
    await client.query(statement);
    await client.end();
  };
  beforeAll(() => asOwner(new URL(server).pathname, `create database ${name}`));
  afterEach(async () => { for (const program of running.splice(0)) await program.kill(); });
  afterAll(() => asOwner(new URL(server).pathname, `drop database ${name} with (force)`));

  it('two servers that start at once on an empty database make it once and know the same people', async () => {
    const both = [start(), start()];
    const urls = await Promise.all(both.map(async (program) => (await program.says(/open at (http:\S+)/))[1]!));
    const [first] = both;
    const [, code] = await first!.says(/one-time code: (\S+)/);
    const entry = { name: 'First', email: 'first@lab.example', password: 'a long enough one' };
    expect((await new HttpClient(urls[0]!).post('/api/setup', { ...entry, code })).status).toBe(200);
    const client = new HttpClient(urls[0]!);
    expect((await client.signIn(entry.email, entry.password)).status).toBe(200);
    // Signed in at one, known at the other: the cookie's secret is kept in the database.
    expect((await (await fetch(`${urls[1]}/api/me`, { headers: { cookie: client.cookie } })).json())).toMatchObject({ email: entry.email });
    for (const program of both) program.signal('SIGTERM');
    expect(await Promise.all(both.map((program) => program.ended))).toEqual([{ status: 0, signal: null }, { status: 0, signal: null }]);
  }, patience);

  it('refuses data of a newer version', async () => {
    await asOwner(`/${name}`, "insert into drizzle.__drizzle_migrations (hash, created_at) values ('later', 32503680000000)");
    const program = start();
    expect(await program.ended).toEqual({ status: 1, signal: null });
    expect(program.complained).toMatch(/newer version.*another DATABASE_URL/);
  }, patience);
});

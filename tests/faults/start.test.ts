/**
 * Starting and stopping, with the commands that people type, as real processes: the demo, the real thing, and every
 * reason not to start, each in one sentence that says what to do.
 */
import { spawnSync } from 'node:child_process';
import { chmodSync, cpSync, existsSync, mkdirSync, mkdtempSync, readFileSync, rmSync, writeFileSync } from 'node:fs';
import { createServer } from 'node:net';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { type SQL, sql } from 'drizzle-orm';
import { afterAll, afterEach, beforeAll, describe, expect, it } from 'vitest';
import type { Device } from '@shared/api/rigs';
import { openDatabase } from '@server/db/engine';
import { HttpClient } from '../support/http-client';
import { freePort, type Program, type ProgramOptions, startProgram } from '../support/program';

/** Long enough for a first start on a machine that is busy with other tests. */
const patience = 240_000;

const place = mkdtempSync(join(tmpdir(), 'tautbook-start-'));
let number = 0;
const freshDirectory = () => join(place, `data-${(number += 1)}`);

/** A migrated data directory with nobody in it, made once and copied: making one takes seconds. */
const empty = freshDirectory();
beforeAll(async () => {
  const open = await openDatabase({ dataDir: empty });
  await open.migrate();
  await open.close();
}, patience);
function emptyDirectory(): string {
  const copy = freshDirectory();
  cpSync(empty, copy, { recursive: true });
  return copy;
}
async function change(dataDir: string, statement: SQL): Promise<void> {
  const open = await openDatabase({ dataDir });
  await open.db.execute(statement);
  await open.close();
}

const running: Program[] = [];
const run = (command: string, args: readonly string[], options: ProgramOptions) => {
  const program = startProgram(command, args, options);
  running.push(program);
  return program;
};

/** What `npm run demo` and `npm start` run, without npm, whose own exit status after Ctrl-C depends on the shell. */
const script = (name: 'demo' | 'start', options: ProgramOptions) => run(process.execPath, ['--import', 'tsx', `server/cli/${name}.ts`], options);
const npm = (args: readonly string[], options: ProgramOptions) => run('npm', args, options);

afterEach(async () => { for (const program of running.splice(0)) await program.kill(); });
afterAll(() => rmSync(place, { recursive: true, force: true }));

/** No process of it is left; a compiler's own helper may take a moment to notice. */
const gone = (program: Program) => expect.poll(() => program.alive, { timeout: 30_000 }).toBe(false);

/** It does not start: says why and what to do on standard error, nothing of stack traces, and leaves the data to others. */
async function refusal(program: Program): Promise<string> {
  expect(await program.ended).toEqual({ status: 1, signal: null });
  await gone(program);
  expect(program.complained.trim().split('\n')).toHaveLength(1);
  expect(program.complained).not.toMatch(/\bat .*:\d+:\d+/);
  return program.complained.trim();
}

describe('npm run demo', () => {
  const data = freshDirectory();
  const signIn = /^ {2}(\w+) +(\S+@\S+) +(\S+)$/gm;
  let first: string;

  it('makes a lab, says where it is and how each role signs in, has a device on the link, and stops at Ctrl-C leaving nothing behind', async () => {
    const port = await freePort();
    const demo = npm(['run', 'demo'], { env: { DATA_DIR: data, PORT: String(port) } });
    await demo.says(/Ctrl-C stops everything/);
    const [, url] = await demo.says(/The demo lab is open at (http:\S+)/);
    expect(url).toBe(`http://127.0.0.1:${port}`);
    const entries = [...demo.said.matchAll(signIn)].map(([, role = '', email = '', password = '']) => ({ role, email, password }));
    expect(new Set(entries.map(({ role }) => role))).toEqual(new Set(['administrator', 'lead', 'operator', 'clinician']));
    for (const { role, email, password } of entries) {
      const client = new HttpClient(url!);
      expect((await client.signIn(email, password)).status, email).toBe(200);
      expect((await client.get('/api/me')).body).toMatchObject({ role, demo: true });
      if (role === 'administrator') {
        await expect.poll(async () => (await client.get<{ devices: Device[] }>('/api/devices')).body.devices.map(({ state }) => state), { timeout: 30_000 }).toContain('connected');
      }
    }
    expect(await (await fetch(url!)).text()).toContain('<div id="root"');
    expect(demo.said).toContain('not a medical device and not a safety system');
    first = demo.said.slice(demo.said.indexOf('The demo lab is open'));

    demo.signal('SIGINT');
    await demo.ended;
    expect(demo.said).toMatch(/Stopped\.\s*$/);
    expect(demo.complained).toBe('');
    await gone(demo);
    expect(existsSync(join(data, 'server.lock'))).toBe(false);
  }, patience);

  it('finds the same lab when it starts again, and ends with status 0', async () => {
    const demo = script('demo', { env: { DATA_DIR: data, PORT: '0' } });
    await demo.says(/Ctrl-C stops everything/);
    expect(demo.said).not.toContain('Making');
    const again = demo.said.slice(demo.said.indexOf('The demo lab is open'));
    const withoutPort = (text: string) => text.slice(0, text.indexOf('Ctrl-C')).replace(/:\d+/, '');
    expect(withoutPort(again)).toBe(withoutPort(first));
    demo.signal('SIGINT');
    // One Ctrl-C that comes twice, from the terminal and passed on by a package runner, is one.
    demo.signal('SIGINT');
    expect(await demo.ended).toEqual({ status: 0, signal: null });
    expect(demo.said).toMatch(/Stopped\.\s*$/);
    await gone(demo);
  }, patience);

  it('stops its device even when it is killed itself', async () => {
    const demo = script('demo', { env: { DATA_DIR: data, PORT: '0' } });
    await demo.says(/Ctrl-C stops everything/);
    process.kill(demo.pid, 'SIGKILL');
    await demo.ended;
    await gone(demo);
  }, patience);

  it('starts after a first start that was broken off while the lab was made', async () => {
    const interrupted = freshDirectory();
    const broken = script('demo', { env: { DATA_DIR: interrupted, PORT: '0' } });
    await broken.says(/Making the study/);
    broken.signal('SIGINT');
    expect(await broken.ended).toEqual({ status: 0, signal: null });
    expect(broken.complained).toBe('');
    const demo = script('demo', { env: { DATA_DIR: interrupted, PORT: '0' } });
    const [, url] = await demo.says(/The demo lab is open at (http:\S+)/);
    await demo.says(/Ctrl-C stops everything/);
    const [[, , email = '', password = ''] = []] = [...demo.said.matchAll(signIn)];
    expect((await new HttpClient(url!).signIn(email, password)).status).toBe(200);
    demo.signal('SIGTERM');
    expect(await demo.ended).toEqual({ status: 0, signal: null });
  }, patience);

  it('does not move into a real lab', async () => {
    const real = emptyDirectory();
    await change(real, sql`insert into people (id, name, email) values ('a', 'A', 'a@lab.example')`);
    expect(await refusal(script('demo', { env: { DATA_DIR: real, PORT: '0' } }))).toMatch(/belong to a real lab.*Set DATA_DIR/);
  }, patience);
});

describe('npm start', () => {
  const data = freshDirectory();

  it('prints a one-time code, and the first visit makes the administrator with it, once', async () => {
    const port = await freePort();
    const server = npm(['start'], { env: { DATA_DIR: data, PORT: String(port) } });
    const [, code] = await server.says(/one-time code: (\S+)/);
    await server.says(/Ctrl-C/);
    const url = `http://127.0.0.1:${port}`;
    expect(server.said).toContain(`Tautbook is open at ${url}`);
    expect(server.said).toContain(`${url}/setup`);
    const visitor = new HttpClient(url);
    expect((await visitor.get('/api/entrance')).body).toEqual({ setupNeeded: true, demo: [] });
    const entry = { name: 'First', email: 'first@lab.example', password: 'a long enough one' };
    expect((await visitor.post('/api/setup', { ...entry, code: 'AAAA-AAAA-AAAA' })).body).toMatchObject({ status: 403, code: 'SETUP_CODE' });
    expect((await visitor.post('/api/setup', { ...entry, code })).status).toBe(200);
    expect((await visitor.post('/api/setup', { ...entry, email: 'second@lab.example', code })).body).toMatchObject({ status: 409, code: 'SETUP_DONE' });
    expect((await visitor.signIn(entry.email, entry.password)).status).toBe(200);
    expect((await visitor.get('/api/me')).body).toMatchObject({ role: 'administrator', demo: false });
    server.signal('SIGINT');
    await server.ended;
    expect(server.said).toMatch(/Stopped\.\s*$/);
    await gone(server);
  }, patience);

  it('has no code any more when it starts again, and knows who signed in before', async () => {
    const server = script('start', { env: { DATA_DIR: data, PORT: '0' } });
    const [, url] = await server.says(/open at (http:\S+)/);
    await server.says(/Ctrl-C/);
    expect(server.said).not.toContain('code');
    expect((await new HttpClient(url!).signIn('first@lab.example', 'a long enough one')).status).toBe(200);
    server.signal('SIGTERM');
    expect(await server.ended).toEqual({ status: 0, signal: null });
  }, patience);

  it('lets one server at a time have a data directory; the one that is there goes on', async () => {
    const first = script('start', { env: { DATA_DIR: data, PORT: '0' } });
    const [, url] = await first.says(/open at (http:\S+)/);
    const told = await refusal(script('start', { env: { DATA_DIR: data, PORT: '0' } }));
    expect(told).toContain(`(process ${first.pid})`);
    expect(told).toMatch(/Stop it first, or start this one with another DATA_DIR and PORT\.$/);
    expect((await new HttpClient(url!).get('/api/entrance')).status).toBe(200);
    // The lock of a server that was killed holds nobody up.
    await first.kill();
    const next = script('start', { env: { DATA_DIR: data, PORT: '0' } });
    await next.says(/open at/);
    next.signal('SIGINT');
    expect((await next.ended).status).toBe(0);
  }, patience);

  it('on a busy port says so, and gives the data directory back', async () => {
    const other = createServer();
    await new Promise<void>((resolve) => other.listen(0, '127.0.0.1', resolve));
    const { port } = other.address() as { port: number };
    const told = await refusal(script('start', { env: { DATA_DIR: data, PORT: String(port) } }));
    expect(told).toBe(`Another program already listens on port ${port} of 127.0.0.1. Stop it, or choose another port: PORT=${port + 1}.`);
    expect(existsSync(join(data, 'server.lock'))).toBe(false);
    await new Promise((resolve) => other.close(resolve));
  }, patience);

  it('with settings that cannot be used names each of them', async () => {
    const told = await refusal(script('start', { env: { DATA_DIR: freshDirectory(), PORT: 'often', AUTH_SECRET: 'short', PUBLIC_URL: 'ftp://lab.example' } }));
    for (const name of ['PORT', 'AUTH_SECRET', 'PUBLIC_URL']) expect(told).toContain(name);
    expect(told).toMatch(/Correct or remove these variables/);
  }, patience);

  it('on an address that this machine has not says so', async () => {
    // 192.0.2.0/24 is kept free for documentation (RFC 5737).
    expect(await refusal(script('start', { env: { DATA_DIR: data, HOST: '192.0.2.1', PORT: '0' } }))).toMatch(/no address 192\.0\.2\.1.*Choose another HOST/);
  }, patience);

  it('without the PostgreSQL that it is set to says so', async () => {
    const told = await refusal(script('start', { env: { DATA_DIR: freshDirectory(), DATABASE_URL: 'postgresql://nobody@127.0.0.1:1/none', PORT: '0' } }));
    expect(told).toMatch(/does not answer.*Check DATABASE_URL/);
  }, patience);
});

describe('a data directory', () => {
  const start = (dataDir: string) => script('start', { env: { DATA_DIR: dataDir, PORT: '0' } });

  it('of a newer version is left alone', async () => {
    const newer = emptyDirectory();
    await change(newer, sql`insert into drizzle.__drizzle_migrations (hash, created_at) values ('later', 32503680000000)`);
    const said = /written by a newer version.*Start the newer version, or choose another data directory/;
    expect(await refusal(start(newer))).toMatch(said);
    expect(await refusal(script('demo', { env: { DATA_DIR: newer, PORT: '0' } }))).toMatch(said);
    // Of a newer engine inside.
    writeFileSync(join(newer, 'database', 'PG_VERSION'), '99\n');
    expect(await refusal(start(newer))).toMatch(said);
  }, patience);

  it('that is damaged is left alone', async () => {
    const damaged = emptyDirectory();
    const control = join(damaged, 'database', 'global', 'pg_control');
    writeFileSync(control, readFileSync(control).subarray(0, 100));
    expect(await refusal(start(damaged))).toMatch(/cannot be opened; it may be damaged.*Put the last backup in its place/);
    expect(readFileSync(control)).toHaveLength(100);
  }, patience);

  it.each([
    ['is a file', (file: string) => file],
    ['lies below a file', (file: string) => join(file, 'data')],
  ])('that %s cannot be made', async (_what, of) => {
    const file = join(place, 'a file');
    writeFileSync(file, 'x');
    expect(await refusal(start(of(file)))).toMatch(/cannot be made: a part of its path is no directory.*DATA_DIR=/);
  }, patience);

  it('that this user may not write says so', async () => {
    const locked = freshDirectory();
    mkdirSync(locked, { mode: 0o555 });
    chmodSync(place, 0o755);
    // For root nothing is read-only: then somebody else starts it (65534: nobody).
    const uid = process.getuid?.() === 0 ? 65_534 : undefined;
    const told = await refusal(script('start', { env: { DATA_DIR: locked, PORT: '0', HOME: tmpdir() }, ...(uid === undefined ? {} : { uid }) }));
    expect(told).toBe(`The data directory ${locked} cannot be written. Give this user the right to write there, or choose another place with DATA_DIR=/some/directory.`);
  }, patience);

  /** A name space of its own for mounts, where the system lets one have it; root is not needed. */
  const mayMount = spawnSync('unshare', ['-rm', 'true']).status === 0;
  const mounted = (mount: string, dataDir: string) => run('unshare', ['-rm', 'sh', '-c', `${mount} && exec "$0" --import tsx server/cli/start.ts`, process.execPath], { env: { DATA_DIR: dataDir, PORT: '0' } });

  it.runIf(mayMount)('on a disk that became read-only says so, whole or fresh', async () => {
    const whole = emptyDirectory();
    expect(await refusal(mounted(`mount --bind '${whole}' '${whole}' && mount -o remount,bind,ro '${whole}'`, whole))).toMatch(/cannot be written.*DATA_DIR=/);
    const disk = freshDirectory();
    mkdirSync(disk);
    expect(await refusal(mounted(`mount -t tmpfs -o ro none '${disk}'`, join(disk, 'data')))).toMatch(/cannot be written.*DATA_DIR=/);
  }, patience);

  it.runIf(mayMount)('on a disk that is full says so', async () => {
    const disk = freshDirectory();
    mkdirSync(disk);
    expect(await refusal(mounted(`mount -t tmpfs -o size=8m none '${disk}'`, join(disk, 'data')))).toMatch(/is full\. Free some space/);
  }, patience);
});

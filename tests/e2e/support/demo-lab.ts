/**
 * The whole server with the demo lab in it, and its people at their browsers.
 *
 * The lab is made once and kept as an archive beside the empty database of the other tests: a file that opens it starts
 * within seconds. Times in the lab are relative to its making, so an archive of this morning is made anew.
 */
import { createHash, randomUUID } from 'node:crypto';
import { mkdirSync, readdirSync, readFileSync, renameSync, rmSync, statSync, writeFileSync } from 'node:fs';
import { join } from 'node:path';
import { fileURLToPath } from 'node:url';
import { pino } from 'pino';
import type { Browser, BrowserContextOptions, Page } from 'playwright-core';
import type { Me } from '@shared/api/people';
import { createTautbook, type Tautbook } from '@server/app';
import { loadConfig } from '@server/config';
import { openDatabase, type OpenDatabase } from '@server/db/engine';
import { type DemoLab, seedDemoLab } from '@server/db/seed';
import { cast, type CastName, demoPassword } from '@server/db/seed/cast';
import { testDatabase } from '../../support/database';
import { HttpClient } from '../../support/http-client';
import { type Visitor, visitor } from '../../support/browser';

const root = fileURLToPath(new URL('../../../', import.meta.url));
const cache = join(root, 'node_modules/.cache/tautbook');
/** What the lab is made from. */
const sources = ['server', 'shared', 'drizzle', 'samples/rigs'];
const longestKeptMs = 2 * 3600_000;

function sourcesDigest(): string {
  const hash = createHash('sha256');
  for (const source of sources) {
    const folder = join(root, source);
    const files = readdirSync(folder, { recursive: true, encoding: 'utf8' }).filter((name) => statSync(join(folder, name)).isFile()).sort();
    for (const file of files) hash.update(file).update(readFileSync(join(folder, file)));
  }
  return hash.digest('hex').slice(0, 16);
}

const silent = pino({ level: 'silent' });

async function demoArchive(): Promise<Blob> {
  const file = join(cache, `demo-lab-${sourcesDigest()}.tar`);
  try {
    if (Date.now() - statSync(file).mtimeMs < longestKeptMs) return new Blob([readFileSync(file)]);
  } catch {
    // Not made yet.
  }
  const made = await testDatabase();
  await seedDemoLab(made, { log: silent });
  const archive = await made.dump();
  await made.close();
  if (archive === null) throw new Error('Browser tests run on the embedded database: unset TEST_DATABASE_URL');
  mkdirSync(cache, { recursive: true });
  for (const old of readdirSync(cache)) if (old.startsWith('demo-lab-') && old.endsWith('.tar')) rmSync(join(cache, old), { force: true });
  const unfinished = `${file}.${randomUUID()}`;
  writeFileSync(unfinished, new Uint8Array(await archive.arrayBuffer()));
  renameSync(unfinished, file);
  return archive;
}

export interface DemoHouse {
  url: string;
  open: OpenDatabase;
  book: Tautbook;
  lab: DemoLab;
  /** Warnings and errors that the server logged. */
  logged: string[];
  /** Somebody of the cast over HTTP, for looking at what a page has changed. */
  client(who: CastName): Promise<HttpClient>;
  /** Somebody of the cast at a browser of their own, signed in without the form. */
  enter(browser: Browser, who: CastName, options?: BrowserContextOptions & { expected?: RegExp }): Promise<Visitor>;
  close(): Promise<void>;
}

/** @param nowMs when the lab's today is; left out: today */
export async function openDemoHouse({ nowMs }: { nowMs?: number } = {}): Promise<DemoHouse> {
  const open = nowMs === undefined ? await openDatabase({ dataDir: '', memory: await demoArchive() }) : await testDatabase();
  const lab = await seedDemoLab(open, { log: silent, ...(nowMs === undefined ? {} : { nowMs }) });
  const logged: string[] = [];
  const log = pino({ level: 'warn' }, { write: (line: string) => void logged.push(line) });
  const config = loadConfig({ PORT: '0', AUTH_SECRET: 'a secret of the tests, long enough to be one' });
  const book = await createTautbook({ config, open, log, demo: lab.signIns, checkResponses: true, clientDirectory: join(root, 'dist/client') });
  const { url } = await book.listen();

  const client = async (who: CastName) => {
    const http = new HttpClient(url);
    const { status } = await http.signIn(cast[who].email, demoPassword);
    if (status !== 200) throw new Error(`${who} could not sign in: ${status}`);
    return http;
  };
  return {
    url, open, book, lab, logged, client,
    async enter(browser, who, more) {
      const http = await client(who);
      const at = await visitor(browser, { baseURL: url, ...more });
      await at.context.addCookies(http.cookie.split('; ').map((pair) => {
        const cut = pair.indexOf('=');
        return { name: pair.slice(0, cut), value: pair.slice(cut + 1), url };
      }));
      return at;
    },
    async close() {
      await book.close();
      await open.close();
    },
  };
}

/** Signs in on the page that is open, as a person does. */
export async function signInByForm(page: Page, email: string, password: string): Promise<void> {
  await page.getByLabel('E-mail').fill(email);
  await page.getByLabel('Password', { exact: true }).fill(password);
  await page.getByRole('button', { name: 'Sign in', exact: true }).click();
}

/** The study of the demo lab whose code this is, as somebody sees it. */
export async function studyOf(http: HttpClient, code: string): Promise<Me['memberships'][number]> {
  const { body } = await http.get<Me>('/api/me');
  const found = body.memberships.find((membership) => membership.studyCode === code);
  if (!found) throw new Error(`Not a member of ${code}`);
  return found;
}

/** Where pictures of pages go to be looked at; not kept in the repository. */
export const screenFile = (name: string): string => join(root, '.screens', `${name}.png`);

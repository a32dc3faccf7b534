/** The demo lab: made once, whole, from fixed seeds, and obeying the rules of every lab. */
import { eq } from 'drizzle-orm';
import { pino } from 'pino';
import { afterAll, beforeAll, describe, expect, test } from 'vitest';
import { createTautbook, type Tautbook } from '@server/app';
import { loadConfig } from '@server/config';
import type { OpenDatabase } from '@server/db/engine';
import * as tables from '@server/db/schema';
import { type DemoLab, seedDemoLab } from '@server/db/seed';
import { chainHolds } from '@server/features/sessions';
import { StartRefusal } from '@server/start-refusal';
import { contentsOf, testDatabase } from '../support/database';
import { HttpClient } from '../support/http-client';

const log = pino({ level: 'silent' });
let open: OpenDatabase;
let lab: DemoLab;
let book: Tautbook;
let url: string;

beforeAll(async () => {
  open = await testDatabase();
  lab = await seedDemoLab(open, { log });
  book = await createTautbook({ config: loadConfig({ PORT: '0', AUTH_SECRET: 'a secret of the tests, long enough to be one' }), open, log, demo: lab.signIns, checkResponses: true });
  ({ url } = await book.listen());
});

afterAll(async () => {
  await book.close();
  await open.close();
});

const digests = async (of: OpenDatabase) => (await of.db.select({ run: tables.recordings.run, digest: tables.recordings.digest }).from(tables.recordings).orderBy(tables.recordings.run));

describe('the demo lab', () => {
  test('holds two studies, twelve pseudonymous participants, both rigs, Heron in two revisions', async () => {
    const [studies, participants, revisions] = await Promise.all([open.db.select().from(tables.studies), open.db.select().from(tables.participants), open.db.select().from(tables.rigRevisions)]);
    expect(studies).toHaveLength(2);
    expect(participants).toHaveLength(12);
    expect(revisions.map(({ file, revision }) => `${file.code}/${revision}`).sort()).toEqual(['heron-8/1', 'heron-8/2', 'wren-8/1']);
  });

  test('has sessions of every state that a day can show, and at least six recorded trials with every kind of flag so far', async () => {
    const states = new Set((await open.db.select({ state: tables.sessions.state }).from(tables.sessions)).map(({ state }) => state));
    expect(states).toEqual(new Set(['planned', 'open', 'closed']));
    const recordings = await open.db.select().from(tables.recordings);
    expect(recordings.length).toBeGreaterThanOrEqual(6);
    expect(recordings.every(({ state, digest, flagsFoundAt, durationS = 30 }: typeof recordings[number] & { durationS?: number }) => state === 'closed' && digest !== null && flagsFoundAt !== null && durationS >= 30)).toBe(true);
    const kinds = new Set((await open.db.select({ kind: tables.flags.kind }).from(tables.flags)).map(({ kind }) => kind));
    expect(kinds).toEqual(new Set(['slack', 'saturation', 'gap', 'slip', 'oscillation']));
  });

  test('has notes of several people, with replies, on spans and points, some resolved', async () => {
    const notes = await open.db.select().from(tables.notes);
    expect(new Set(notes.map(({ authorId }) => authorId)).size).toBeGreaterThanOrEqual(3);
    expect(notes.some(({ replyTo }) => replyTo !== null)).toBe(true);
    expect(notes.some(({ endS }) => endS !== null)).toBe(true);
    expect(notes.some(({ resolvedAt }) => resolvedAt !== null)).toBe(true);
    expect(notes.every(({ createdAt }) => createdAt.getTime() <= Date.now())).toBe(true);
  });

  test('keeps a log of every session whose chain holds', async () => {
    for (const { id } of await open.db.select({ id: tables.sessions.id }).from(tables.sessions)) {
      const entries = await open.db.select().from(tables.logEntries).where(eq(tables.logEntries.sessionId, id)).orderBy(tables.logEntries.n);
      expect(entries.length).toBeGreaterThan(0);
      expect(chainHolds(id, entries)).toBe(true);
    }
  });

  test('lets every role sign in, and shows the operator today’s sessions and a trial to judge', async () => {
    expect(new Set(lab.signIns.map(({ role }) => role))).toEqual(new Set(['administrator', 'lead', 'operator', 'clinician']));
    for (const { email, password } of lab.signIns) expect((await new HttpClient(url).signIn(email, password)).status).toBe(200);
    const operator = new HttpClient(url);
    await operator.signIn(lab.signIns.find(({ role }) => role === 'operator')!.email, lab.signIns[0]!.password);
    const today = await operator.get<{ sessions: unknown[]; toJudge: unknown[]; recent: unknown[] }>('/api/today');
    expect(today.status).toBe(200);
    expect(today.body.sessions.length).toBeGreaterThanOrEqual(2);
    expect(today.body.toJudge.length).toBeGreaterThanOrEqual(1);
  });

  test('is found at the second start: nothing is made again and the device keeps its key', async () => {
    const before = await contentsOf(open.db);
    const again = await seedDemoLab(open, { log });
    expect(again).toEqual({ ...lab, fresh: false });
    expect(await contentsOf(open.db)).toEqual(before);
  });

  test('is the same lab wherever it is made', async () => {
    const elsewhere = await testDatabase();
    await seedDemoLab(elsewhere, { log, nowMs: Date.UTC(2031, 4, 6, 12) });
    expect(await digests(elsewhere)).toEqual(await digests(open));
    await elsewhere.close();
  }, 180_000);

  test('is never put into a real lab', async () => {
    const real = await testDatabase();
    await real.db.insert(tables.people).values({ id: 'somebody', name: 'Somebody', email: 'somebody@lab.example' });
    await expect(seedDemoLab(real, { log })).rejects.toBeInstanceOf(StartRefusal);
    await real.close();
  });
});

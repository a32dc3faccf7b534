/** What the database promises to everything above it, on whichever engine the tests run. */
import { mkdtempSync, rmSync, writeFileSync, chmodSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { sql } from 'drizzle-orm';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { openDatabase, type OpenDatabase } from '@server/db/engine';
import { people, recordingChunks, recordings, devices, rigs, rigRevisions } from '@server/db/schema';
import { testDatabase } from '../support/database';

const rows = (result: unknown) => (result as { rows: Record<string, unknown>[] }).rows;

describe('a database for a test file', () => {
  let open: OpenDatabase;
  beforeAll(async () => { open = await testDatabase(); });
  afterAll(() => open.close());

  it('gives back every byte of a chunk as it was stored', async () => {
    const data = Uint8Array.from({ length: 70_000 }, (_, i) => (i * 31) % 256);
    const { db } = open;
    const [rig] = await db.insert(rigs).values({ code: 'bytes' }).returning();
    const [revision] = await db.insert(rigRevisions).values({ rigId: rig!.id, revision: 1, title: 'Bytes', file: {} as never, digest: 'd' }).returning();
    const [device] = await db.insert(devices).values({ name: 'Bytes', rigId: rig!.id, keyHash: 'h', keyHint: '…' }).returning();
    const [recording] = await db.insert(recordings).values({ deviceId: device!.id, run: 'r', rigRevisionId: revision!.id, rateHz: 1000, channels: [], startUs: 0, startedAt: new Date(0) }).returning();
    await db.insert(recordingChunks).values({ recordingId: recording!.id, n: 0, first: 0, count: 1, t0Us: 0, t1Us: 0, data });
    const [row] = await db.select().from(recordingChunks);
    expect(Buffer.compare(Buffer.from(row!.data), Buffer.from(data))).toBe(0);
  });

  it('stores the samples without a second compression', async () => {
    const found = rows(await open.db.execute(sql`
      select attrelid::regclass::text as name, attstorage as storage from pg_attribute
      where attname = 'data' and attrelid in ('recording_chunks'::regclass, 'recording_tail'::regclass, 'recording_pyramid'::regclass)`));
    expect(found).toHaveLength(3);
    expect(new Set(found.map((row) => row['storage']))).toEqual(new Set(['e'])); // pg_attribute: e = external
  });

  it('undoes a transaction that fails', async () => {
    const attempt = open.db.transaction(async (tx) => {
      await tx.insert(people).values({ id: 'p', name: 'P', email: 'p@lab.example' });
      throw new Error('stop');
    });
    await expect(attempt).rejects.toThrow('stop');
    expect(await open.db.select().from(people)).toHaveLength(0);
  });

  it('refuses data of a newer version', async () => {
    await open.db.execute(sql`insert into drizzle.__drizzle_migrations (hash, created_at) values ('later', 32503680000000)`);
    await expect(open.migrate()).rejects.toMatchObject({ code: 'DATA_NEWER', wayOut: expect.any(String) });
  });
});

describe('a data directory on disk', () => {
  const dataDir = mkdtempSync(join(tmpdir(), 'tautbook-data-'));
  afterAll(() => rmSync(dataDir, { recursive: true, force: true }));

  it('keeps what was committed, has fsync on, and lets in one server at a time', async () => {
    const first = await openDatabase({ dataDir });
    await first.migrate();
    const [setting] = rows(await first.db.execute(sql`select current_setting('fsync') as fsync, current_setting('wal_sync_method') as method`));
    expect(setting).toEqual({ fsync: 'on', method: 'fsync' });
    await first.db.insert(people).values({ id: 'p', name: 'P', email: 'p@lab.example' });
    await expect(openDatabase({ dataDir })).rejects.toMatchObject({ code: 'DATA_IN_USE' });
    await first.close();

    const second = await openDatabase({ dataDir });
    await second.migrate();
    expect(await second.db.select().from(people)).toHaveLength(1);
    await second.close();
  });

  it('opens after a server that was killed and left its lock behind', async () => {
    // 2^22 is above the highest process number that Linux gives.
    writeFileSync(join(dataDir, 'server.lock'), JSON.stringify({ pid: 4_194_305, start: '1' }));
    const open = await openDatabase({ dataDir });
    expect(await open.db.select().from(people)).toHaveLength(1);
    await open.close();
  });

  it('says that it cannot be written', async () => {
    const place = mkdtempSync(join(tmpdir(), 'tautbook-read-only-'));
    chmodSync(place, 0o555);
    // For root nothing is read-only, so root steps aside for the attempt (65534: nobody).
    const isRoot = process.getuid?.() === 0;
    if (isRoot) process.seteuid?.(65_534);
    const attempt = openDatabase({ dataDir: join(place, 'data') });
    if (isRoot) process.seteuid?.(0);
    await expect(attempt).rejects.toMatchObject({ code: 'DATA_READ_ONLY' });
    rmSync(place, { recursive: true, force: true });
  });
});

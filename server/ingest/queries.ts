import { setImmediate as breathe } from 'node:timers/promises';
import { and, asc, desc, eq, gt, gte, inArray, isNull, lt, lte, sql } from 'drizzle-orm';
import type { RigFile } from '@shared/rig';
import type { Database } from '../db/engine';
import { devices, recordingChunks, recordingPyramid, recordings, recordingTail, rigRevisions, rigs, ruleRevisions, sessions, trials } from '../db/schema';

export type RecordingRow = typeof recordings.$inferSelect;
export type NewRecording = typeof recordings.$inferInsert;
export type ChunkRow = typeof recordingChunks.$inferInsert;
export type PyramidRow = typeof recordingPyramid.$inferInsert;
export type TailRow = typeof recordingTail.$inferInsert;

export async function findDeviceByKey(db: Database, keyHash: string) {
  const [row] = await db
    .select({ id: devices.id, name: devices.name, rigCode: rigs.code, revokedAt: devices.revokedAt })
    .from(devices).innerJoin(rigs, eq(rigs.id, devices.rigId)).where(eq(devices.keyHash, keyHash));
  return row ?? null;
}
export type DeviceRow = NonNullable<Awaited<ReturnType<typeof findDeviceByKey>>>;

export async function findRigRevision(db: Database, code: string, revision: number): Promise<{ id: string; file: RigFile } | null> {
  const [row] = await db.select({ id: rigRevisions.id, file: rigRevisions.file }).from(rigRevisions)
    .innerJoin(rigs, eq(rigs.id, rigRevisions.rigId)).where(and(eq(rigs.code, code), eq(rigRevisions.revision, revision)));
  return row ?? null;
}

export async function rigOfRevision(db: Database, id: string): Promise<RigFile> {
  const [row] = await db.select({ file: rigRevisions.file }).from(rigRevisions).where(eq(rigRevisions.id, id));
  if (!row) throw new Error('A recording points at a rig revision that is not there');
  return row.file;
}

/** Newest rules of the trial's study as they are stored; empty stands for the rig's default rules. */
export async function rulesOfTrial(db: Database, trialId: string): Promise<Record<string, unknown>> {
  const [row] = await db.select({ rules: ruleRevisions.rules }).from(ruleRevisions)
    .innerJoin(sessions, eq(sessions.studyId, ruleRevisions.studyId)).innerJoin(trials, eq(trials.sessionId, sessions.id))
    .where(eq(trials.id, trialId)).orderBy(desc(ruleRevisions.revision)).limit(1);
  return row?.rules ?? {};
}

/** @param more faults to add to those counted so far: another connection of the device, or another server, may be counting too */
export async function touchDevice(db: Database, id: string, values: Partial<Pick<typeof devices.$inferInsert, 'clock' | 'lastSeenAt'>>, more: Readonly<Record<string, number>> = {}): Promise<void> {
  const faults = sql`${devices.faults} || (
    select coalesce(jsonb_object_agg(added.code, added.count::int + coalesce((${devices.faults} ->> added.code)::int, 0)), '{}')
    from jsonb_each_text(${JSON.stringify(more)}::jsonb) as added (code, count))`;
  await db.update(devices).set(Object.keys(more).length === 0 ? values : { ...values, faults }).where(eq(devices.id, id));
}

export async function insertRecording<D extends string | null>(db: Database, values: NewRecording & { deviceId: D }): Promise<RecordingRow & { deviceId: D }> {
  const [row] = await db.insert(recordings).values(values).returning();
  if (!row) throw new Error('The recording was not written');
  return { ...row, deviceId: values.deviceId };
}

export async function findRun(db: Database, deviceId: string, run: string): Promise<RecordingRow | null> {
  const [row] = await db.select().from(recordings).where(and(eq(recordings.deviceId, deviceId), eq(recordings.run, run)));
  return row ?? null;
}

export async function findRecording(db: Database, id: string): Promise<RecordingRow | null> {
  const [row] = await db.select().from(recordings).where(eq(recordings.id, id));
  return row ?? null;
}

export async function deleteRecording(db: Database, id: string): Promise<void> {
  await db.delete(recordings).where(eq(recordings.id, id));
}

/** Imports that a stop of the server broke off: files whose rows never came to their end. */
export async function dropUnfinishedFiles(db: Database, startedBeforeId: string): Promise<void> {
  await db.delete(recordings).where(and(eq(recordings.state, 'growing'), isNull(recordings.deviceId), lt(recordings.id, startedBeforeId)));
}

/** A recording that a device makes or made. */
export type RunRow = RecordingRow & { deviceId: string };

const ofDevice = (row: RecordingRow): row is RunRow => row.deviceId !== null;

export const growingRuns = async (db: Database, deviceId?: string): Promise<RunRow[]> => (await growingOf(db, deviceId)).filter(ofDevice);

const growingOf = (db: Database, deviceId?: string): Promise<RecordingRow[]> =>
  db.select().from(recordings).where(and(eq(recordings.state, 'growing'), deviceId === undefined ? undefined : eq(recordings.deviceId, deviceId))).orderBy(asc(recordings.id));

export const tailOf = (db: Database, recordingId: string) =>
  db.select({ batch: recordingTail.batch, data: recordingTail.data }).from(recordingTail).where(eq(recordingTail.recordingId, recordingId)).orderBy(asc(recordingTail.batch));

/** How far the run is after a commit. Marks and gaps only when they changed. */
export interface Progress {
  id: string;
  nextBatch: number;
  samples: number;
  nextSample: number;
  lastUs: number;
  gaps: RecordingRow['gaps'] | null;
  marks: RecordingRow['marks'] | null;
}

export interface CommitLoad {
  progress: readonly Progress[];
  tail: readonly TailRow[];
  chunks: readonly ChunkRow[];
  pyramid: readonly PyramidRow[];
  /** Tail rows whose batches are in a chunk now: every one of the recording below this batch. */
  replaced: readonly { recordingId: string; below: number }[];
}

/** Bytes of one statement: what the embedded database takes in a few milliseconds, so that the event loop is not held longer. */
const STATEMENT_BYTES = 262_144;

/**
 * Everything of one group commit, or nothing of it. The same load twice is stored once, so that a commit whose answer got
 * lost can be tried again.
 */
export async function commitRuns(db: Database, load: CommitLoad): Promise<void> {
  await db.transaction(async (tx) => {
    for (const rows of slices(load.tail)) {
      await tx.insert(recordingTail).values(rows).onConflictDoNothing();
      await breathe();
    }
    for (const rows of slices(load.chunks)) {
      await tx.insert(recordingChunks).values(rows).onConflictDoNothing();
      await breathe();
    }
    for (const rows of slices(load.pyramid)) {
      await tx.insert(recordingPyramid).values(rows).onConflictDoNothing();
      await breathe();
    }
    if (load.replaced.length > 0) {
      const rows = JSON.stringify(load.replaced);
      await tx.execute(sql`
        delete from ${recordingTail} as t using jsonb_to_recordset(${rows}::jsonb) as v("recordingId" uuid, below int)
        where t.recording_id = v."recordingId" and t.batch < v.below`);
    }
    if (load.progress.length > 0) {
      const rows = JSON.stringify(load.progress);
      await tx.execute(sql`
        update ${recordings} as r set next_batch = v."nextBatch", samples = v.samples, next_sample = v."nextSample", last_us = v."lastUs",
          gaps = coalesce(v.gaps, r.gaps), marks = coalesce(v.marks, r.marks)
        from jsonb_to_recordset(${rows}::jsonb) as v(id uuid, "nextBatch" int, samples int, "nextSample" int, "lastUs" double precision, gaps jsonb, marks jsonb)
        where r.id = v.id and r.state = 'growing'`);
    }
  });
}

function slices<Row extends { data: Uint8Array }>(rows: readonly Row[]): Row[][] {
  const out: Row[][] = [];
  let bytes = Number.POSITIVE_INFINITY;
  for (const row of rows) {
    if (bytes + row.data.length > STATEMENT_BYTES) {
      out.push([]);
      bytes = 0;
    }
    out.at(-1)?.push(row);
    bytes += row.data.length;
  }
  return out;
}

/**
 * Gives room of dead tail rows back to the table. PostgreSQL does so by itself; the embedded database has nobody who does,
 * and the tail would grow by the raw size of everything that is ever recorded.
 */
export async function sweepTail(db: Database): Promise<void> {
  await db.execute(sql`vacuum ${recordingTail}`);
}

/** Trials that still stand as running though their recording is closed: the server stopped between the two. */
export const endedUntold = (db: Database) =>
  db.select({ trialId: trials.id, recordingId: recordings.id, endReason: recordings.endReason }).from(recordings)
    .innerJoin(trials, eq(trials.id, recordings.trialId)).where(and(eq(recordings.state, 'closed'), inArray(trials.state, ['recording', 'away'])));

/** @param nextBatch what the run wanted next. @returns false when the recording is not where the caller left it, and then nothing changed */
export async function closeRecording(db: Database, id: string, nextBatch: number, values: Partial<NewRecording>, pyramid: readonly PyramidRow[]): Promise<boolean> {
  return db.transaction(async (tx) => {
    const closed = await tx.update(recordings).set({ ...values, state: 'closed' })
      .where(and(eq(recordings.id, id), eq(recordings.state, 'growing'), eq(recordings.nextBatch, nextBatch))).returning({ id: recordings.id });
    if (closed.length === 0) return false;
    for (const rows of slices(pyramid)) await tx.insert(recordingPyramid).values(rows).onConflictDoNothing();
    return true;
  });
}

/** A few chunks at a time, in order, from the one numbered `n`. */
export const someChunks = (db: Database, recordingId: string, n: number, most: number) =>
  db.select({ n: recordingChunks.n, data: recordingChunks.data }).from(recordingChunks)
    .where(and(eq(recordingChunks.recordingId, recordingId), gte(recordingChunks.n, n))).orderBy(asc(recordingChunks.n)).limit(most);

/** Chunks that touch a span of the recording's time, µs; and, at most, so many of them. */
export const chunksBetween = (db: Database, recordingId: string, fromUs: number, toUs: number) =>
  db.select({ data: recordingChunks.data }).from(recordingChunks)
    .where(and(eq(recordingChunks.recordingId, recordingId), gte(recordingChunks.t1Us, fromUs), lte(recordingChunks.t0Us, toUs))).orderBy(asc(recordingChunks.n));

export const blocksBetween = (db: Database, recordingId: string, level: number, fromUs: number, toUs: number) =>
  db.select({ data: recordingPyramid.data }).from(recordingPyramid)
    .where(and(eq(recordingPyramid.recordingId, recordingId), eq(recordingPyramid.level, level), gte(recordingPyramid.t1Us, fromUs), lte(recordingPyramid.t0Us, toUs)))
    .orderBy(asc(recordingPyramid.n));

/** End of what the blocks of a level cover, µs; -1 when there is none. */
export async function coveredUs(db: Database, recordingId: string, level: number): Promise<number> {
  const [row] = await db.select({ t1Us: recordingPyramid.t1Us }).from(recordingPyramid)
    .where(and(eq(recordingPyramid.recordingId, recordingId), eq(recordingPyramid.level, level))).orderBy(desc(recordingPyramid.n)).limit(1);
  return row?.t1Us ?? -1;
}

export const chunksAfter = (db: Database, recordingId: string, afterUs: number) =>
  db.select({ data: recordingChunks.data }).from(recordingChunks)
    .where(and(eq(recordingChunks.recordingId, recordingId), gt(recordingChunks.t1Us, afterUs))).orderBy(asc(recordingChunks.n));

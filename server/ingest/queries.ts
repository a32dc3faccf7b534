import { and, asc, desc, eq, gt, gte, lt, lte, sql } from 'drizzle-orm';
import type { RigFile } from '@shared/rig';
import type { Database } from '../db/engine';
import { devices, recordingChunks, recordingPyramid, recordings, recordingTail, rigRevisions, rigs } from '../db/schema';

export type RecordingRow = typeof recordings.$inferSelect;
export type NewRecording = typeof recordings.$inferInsert;
export type ChunkRow = typeof recordingChunks.$inferInsert;
export type PyramidRow = typeof recordingPyramid.$inferInsert;
export type TailRow = typeof recordingTail.$inferInsert;

export async function findDeviceByKey(db: Database, keyHash: string) {
  const [row] = await db
    .select({ id: devices.id, name: devices.name, rigCode: rigs.code, revokedAt: devices.revokedAt, faults: devices.faults })
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

export async function touchDevice(db: Database, id: string, values: Partial<Pick<typeof devices.$inferInsert, 'faults' | 'clock' | 'lastSeenAt'>>): Promise<void> {
  await db.update(devices).set(values).where(eq(devices.id, id));
}

export async function insertRecording(db: Database, values: NewRecording): Promise<RecordingRow> {
  const [row] = await db.insert(recordings).values(values).returning();
  if (!row) throw new Error('The recording was not written');
  return row;
}

export async function findRun(db: Database, deviceId: string, run: string): Promise<RecordingRow | null> {
  const [row] = await db.select().from(recordings).where(and(eq(recordings.deviceId, deviceId), eq(recordings.run, run)));
  return row ?? null;
}

export async function findRecording(db: Database, id: string): Promise<RecordingRow | null> {
  const [row] = await db.select().from(recordings).where(eq(recordings.id, id));
  return row ?? null;
}

export const growingRuns = (db: Database): Promise<RecordingRow[]> => db.select().from(recordings).where(eq(recordings.state, 'growing')).orderBy(asc(recordings.id));

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

/** Everything of one group commit, or nothing of it. */
export async function commitRuns(db: Database, load: CommitLoad): Promise<void> {
  await db.transaction(async (tx) => {
    if (load.tail.length > 0) await tx.insert(recordingTail).values([...load.tail]);
    if (load.chunks.length > 0) await tx.insert(recordingChunks).values([...load.chunks]);
    if (load.pyramid.length > 0) await tx.insert(recordingPyramid).values([...load.pyramid]).onConflictDoNothing();
    for (const { recordingId, below } of load.replaced) {
      await tx.delete(recordingTail).where(and(eq(recordingTail.recordingId, recordingId), lt(recordingTail.batch, below)));
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

export async function closeRecording(db: Database, id: string, values: Partial<NewRecording>, pyramid: readonly PyramidRow[]): Promise<void> {
  await db.transaction(async (tx) => {
    if (pyramid.length > 0) await tx.insert(recordingPyramid).values([...pyramid]).onConflictDoNothing();
    await tx.update(recordings).set({ ...values, state: 'closed' }).where(and(eq(recordings.id, id), eq(recordings.state, 'growing')));
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

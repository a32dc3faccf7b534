/** Stored recordings as streams of chunks: read back, and filed in one go. */
import { v7 } from 'uuid';
import type { Chunk } from '@shared/recording';
import type { Database } from '../db/engine';
import { closeRecording, commitRuns, deleteRecording, findRecording, insertRecording, type NewRecording, type RecordingRow, someChunks, tailOf } from './queries';
import { asChunk, unpackTail } from './received-batch';
import { createSealer } from './seal';
import { unpackChunk } from './zlib-codec';

const CHUNKS_AT_ONCE = 16;
const GAPS_LISTED = 2_000;

/** Encoded chunks in order, few in memory at a time. @param fromChunk number of the first */
export async function* readEncodedChunks(db: Database, recordingId: string, fromChunk = 0): AsyncGenerator<Uint8Array> {
  for (let n = fromChunk; ;) {
    const rows = await someChunks(db, recordingId, n, CHUNKS_AT_ONCE);
    for (const row of rows) yield row.data;
    const last = rows.at(-1);
    if (last === undefined || rows.length < CHUNKS_AT_ONCE) return;
    n = last.n + 1;
  }
}

/** All samples that are durable: chunks, then what still lies in the tail. */
export async function* readChunks(db: Database, recordingId: string): AsyncGenerator<Chunk> {
  let first = 0;
  for await (const data of readEncodedChunks(db, recordingId)) {
    const chunk = unpackChunk(data);
    first = chunk.first + chunk.count;
    yield chunk;
  }
  for (const { data } of await tailOf(db, recordingId)) {
    for (const batch of unpackTail(data)) {
      yield asChunk(batch, first);
      first += batch.count;
    }
  }
}

export type RecordingToFile = Pick<NewRecording, 'deviceId' | 'run' | 'rigRevisionId' | 'rateHz' | 'channels' | 'startedAt'>
  & Partial<Pick<NewRecording, 'trialId' | 'firmware' | 'startUs' | 'startUncertaintyUs' | 'marks' | 'endReason' | 'decimals'>>;

export interface Filing {
  /** Told after each durable chunk, how many samples are stored. */
  onStored?(samples: number): void;
  /** Stops between two chunks; what was stored is taken back. */
  signal?: AbortSignal;
}

/**
 * Files a finished recording: chunks, pyramid, digest, gaps and statistics, closed at the end. Chunk by chunk, so that the
 * recorder's commits go on between them; when it breaks off, nothing of it stays.
 */
export async function writeRecording(db: Database, meta: RecordingToFile, chunks: AsyncIterable<Chunk> | Iterable<Chunk>, filing: Filing = {}): Promise<RecordingRow> {
  const { endReason, startUs = 0, deviceId = null, ...rest } = meta;
  const recording = await insertRecording(db, { ...rest, deviceId, id: v7(), startUs });
  try {
    return await writeChunks(db, recording, endReason ?? 'done', chunks, filing);
  } catch (error) {
    await deleteRecording(db, recording.id);
    throw error;
  }
}

async function writeChunks(db: Database, recording: RecordingRow, endReason: NonNullable<NewRecording['endReason']>, chunks: AsyncIterable<Chunk> | Iterable<Chunk>, { onStored, signal }: Filing): Promise<RecordingRow> {
  const sealer = createSealer(recording.id, recording.channels, recording.rateHz, GAPS_LISTED);
  let lastUs = 0;
  let samples = 0;
  for await (const chunk of chunks) {
    signal?.throwIfAborted();
    if (chunk.count === 0) continue;
    const sealed = sealer.seal({ ...chunk, first: samples });
    samples += chunk.count;
    lastUs = chunk.timesUs[chunk.count - 1] ?? lastUs;
    await commitRuns(db, { progress: [], tail: [], chunks: [sealed.chunk], pyramid: sealed.pyramid, replaced: [] });
    onStored?.(samples);
  }
  const { pyramid, values } = sealer.finish();
  await closeRecording(db, recording.id, 0, { ...values, nextSample: samples, lastUs, endReason, closedAt: new Date(recording.startedAt.getTime() + lastUs / 1000) }, pyramid);
  const closed = await findRecording(db, recording.id);
  if (closed === null) throw new Error('The recording that was just filed is not there');
  return closed;
}

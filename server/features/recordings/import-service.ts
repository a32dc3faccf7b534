/**
 * Files recordings that come as CSV (the product's recording file, gzipped or not).
 *
 * The file is laid into a temporary file while it is looked through whole; only when nothing is wrong with it does the
 * second reading store it, chunk by chunk. Memory does not grow with its length, and the recorder's commits go on between
 * the chunks.
 */
import { createReadStream, createWriteStream } from 'node:fs';
import { mkdtemp, rm } from 'node:fs/promises';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { type Readable, Transform } from 'node:stream';
import { pipeline } from 'node:stream/promises';
import { createGunzip } from 'node:zlib';
import { v7 } from 'uuid';
import { type FaultPoint, recordingId, type TrialId } from '@shared/api/common';
import type { QueryOf } from '@shared/api/contract';
import type { ImportLine, importRecording } from '@shared/api/recordings';
import { type Chunk, createCsvReader, type CsvFault, type CsvReader, nominalRate } from '@shared/recording';
import type { Database } from '../../db/engine';
import { problemOf, Refusal } from '../../http';
import { deleteRecording, dropUnfinishedFiles, writeRecording } from '../../ingest';
import type { Actor, SessionService } from '../sessions';
import { refuse } from './errors';

/** Bytes that may come in, and that they may unpack to. */
const MOST_BYTES = 4 * 1024 ** 3;
const MOST_UNPACKED = 16 * 1024 ** 3;
/** Time of which the rate is told, µs; a second would do, jitter wants more. */
const RATE_FROM_SAMPLES = 20_000;
const TELL_EVERY_MS = 100;
/** An import that has not ended after so long never will. */
const LONGEST_IMPORT_MS = 3_600_000;

export interface ImportServiceParts {
  db: Database;
  sessions: SessionService;
  now: () => Date;
}

export type ImportService = ReturnType<typeof createImportService>;

/** What looking through a file finds. */
interface Looked {
  readonly channels: readonly string[];
  readonly decimals: CsvReader['decimals'];
  readonly samples: number;
  readonly rateHz: number;
}

export function createImportService({ db, sessions, now }: ImportServiceParts) {
  return {
    /** Takes back what a stop of the server broke off. Another server of the same database may be storing one now. */
    async sweep(): Promise<void> {
      await dropUnfinishedFiles(db, v7({ msecs: now().getTime() - LONGEST_IMPORT_MS }));
    },

    /**
     * Looks the whole file through, then hands out how far the storing is.
     *
     * @throws Refusal before the first line: the trial cannot take a recording, or the file has faults
     */
    async begin(trial: TrialId, body: Readable, { fileName, startedAt }: QueryOf<typeof importRecording>, by: Actor, signal: AbortSignal): Promise<AsyncGenerator<ImportLine>> {
      const { rigRevisionId, rig } = await sessions.rigForFiling(trial);
      const folder = await mkdtemp(join(tmpdir(), 'tautbook-import-'));
      const drop = () => rm(folder, { recursive: true, force: true });
      const file = join(folder, 'recording');
      try {
        const gzipped = await spool(body, file, signal);
        const looked = await lookThrough(file, gzipped, rig.cables.length, signal);
        return store({ trial, file, gzipped, looked, rigRevisionId, cableCount: rig.cables.length, fileName, startedAt: startedAt ? new Date(startedAt) : now(), by, signal, drop });
      } catch (error) {
        await drop();
        throw error;
      }
    },
  };

  interface ToStore {
    trial: TrialId;
    file: string;
    gzipped: boolean;
    looked: Looked;
    rigRevisionId: string;
    cableCount: number;
    fileName: string;
    startedAt: Date;
    by: Actor;
    signal: AbortSignal;
    drop: () => Promise<void>;
  }

  async function* store({ trial, file, gzipped, looked, rigRevisionId, cableCount, fileName, startedAt, by, signal, drop }: ToStore): AsyncGenerator<ImportLine> {
    let stored = 0;
    try {
      const reader = createCsvReader({ cableCount, chunkSamples: Math.max(1, Math.round(looked.rateHz)) });
      const writing = writeRecording(db, {
        deviceId: null, run: fileName, rigRevisionId, rateHz: looked.rateHz, channels: [...looked.channels], firmware: '', startedAt,
        decimals: { time: looked.decimals.time, channels: [...looked.decimals.channels] },
      }, chunksOf(file, gzipped, reader), { signal, onStored: (samples) => { stored = samples; } });
      const outcome = writing.then((recording) => ({ recording }), (error: unknown) => ({ error }));
      let ended: Awaited<typeof outcome> | null = null;
      while (ended === null) {
        ended = await Promise.race([outcome, new Promise<null>((resolve) => setTimeout(resolve, TELL_EVERY_MS, null))]);
        if (ended === null) yield { state: 'storing', samples: stored, of: looked.samples };
      }
      if ('error' in ended) throw ended.error;
      const { recording } = ended;
      try {
        signal.throwIfAborted();
        await sessions.fileRecording(trial, recordingId.parse(recording.id), by);
      } catch (error) {
        await deleteRecording(db, recording.id);
        throw error;
      }
      yield { state: 'done', recordingId: recordingId.parse(recording.id), samples: recording.samples, durationS: recording.lastUs / 1e6, rateHz: recording.rateHz, gaps: recording.gaps.length };
    } catch (error) {
      if (signal.aborted) return;
      if (!(error instanceof Refusal)) throw error;
      yield { state: 'failed', problem: problemOf(error) };
    } finally {
      await drop();
    }
  }
}

/** Lays the body into a file. @returns whether it is gzip, told from its first two bytes (RFC 1952) */
async function spool(body: Readable, file: string, signal: AbortSignal): Promise<boolean> {
  let bytes = 0;
  let head = Buffer.alloc(0);
  const counting = new Transform({
    transform(piece: Buffer, _encoding, done) {
      bytes += piece.length;
      if (head.length < 2) head = Buffer.concat([head, piece.subarray(0, 2)]);
      if (bytes > MOST_BYTES) done(refuse('FILE_TOO_LARGE', { most: MOST_BYTES / 1024 ** 3 }));
      else done(null, piece);
    },
  });
  try {
    await pipeline(body, counting, createWriteStream(file), { signal });
  } catch (error) {
    if (error instanceof Refusal) throw error;
    if ((error as NodeJS.ErrnoException).code === 'ERR_STREAM_PREMATURE_CLOSE' || signal.aborted) throw refuse('FILE_CUT_SHORT');
    throw error;
  }
  return head[0] === 0x1f && head[1] === 0x8b;
}

/** The file's text in pieces. @throws Refusal FILE_NOT_GZIP, FILE_TOO_LARGE */
async function* piecesOf(file: string, gzipped: boolean): AsyncGenerator<Buffer> {
  const stream = gzipped ? createReadStream(file).pipe(createGunzip()) : createReadStream(file);
  let bytes = 0;
  try {
    for await (const piece of stream as AsyncIterable<Buffer>) {
      bytes += piece.length;
      if (bytes > MOST_UNPACKED) throw refuse('FILE_TOO_LARGE', { most: MOST_UNPACKED / 1024 ** 3 });
      yield piece;
    }
  } catch (error) {
    if (error instanceof Refusal || !/^Z_|unexpected end of file/i.test(`${(error as NodeJS.ErrnoException).code ?? ''} ${(error as Error).message}`)) throw error;
    throw refuse('FILE_NOT_GZIP');
  }
}

async function* chunksOf(file: string, gzipped: boolean, reader: CsvReader): AsyncGenerator<Chunk> {
  for await (const piece of piecesOf(file, gzipped)) yield* reader.push(piece);
  yield* reader.finish();
}

async function lookThrough(file: string, gzipped: boolean, cableCount: number, signal: AbortSignal): Promise<Looked> {
  const reader = createCsvReader({ cableCount });
  const times: number[] = [];
  for await (const chunk of chunksOf(file, gzipped, reader)) {
    signal.throwIfAborted();
    for (let i = 0; i < chunk.count && times.length < RATE_FROM_SAMPLES; i += 1) times.push(chunk.timesUs[i] as number);
  }
  if (reader.faults.length > 0) throw refuse('FILE_FAULTS', {}, reader.faults.map(faultPoint));
  const rateHz = nominalRate(Float64Array.from(times), times.length);
  if (rateHz === null) throw refuse('FILE_TOO_SHORT', { samples: reader.samples });
  return { channels: reader.channels, decimals: reader.decimals, samples: reader.samples, rateHz };
}

const faultPoint = ({ code, line, column, found, expected }: CsvFault): FaultPoint => ({ code, path: `line ${line}, column ${column}`, message: `Found ${found}, expected ${expected}.` });

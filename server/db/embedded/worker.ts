/**
 * The thread of the embedded database: it alone touches the files, waits for the disk, and makes checkpoints.
 *
 * PGlite has no background processes. Nobody but us ends its journal (WAL): without checkpoints it would grow by all that is
 * ever written, and a start after a kill would read all of it again. One is made when the journal has grown by so much and
 * no transaction is open.
 */
import { parentPort, workerData } from 'node:worker_threads';
import { PGlite } from '@electric-sql/pglite';
import { binaryBytes } from './binary-bytes';
import { durableOptions } from './durable-node-fs';
import type { Answer, Asked, FirstWord, QueryResult, Question } from './messages';

const CHECKPOINT_AFTER_BYTES = 64 * 1024 * 1024;
const LOOK_EVERY_MS = 2_000;

/** Times stay text, as Drizzle wants them: timestamps, dates, intervals, and arrays of those and of numeric. */
const keptAsText = [1114, 1184, 1186, 1082, 1231, 1115, 1185, 1187, 1182];

const port = parentPort;
if (port === null) throw new Error('This runs as a worker thread.');
const { directory } = workerData as { directory: string };

let pg: PGlite;
try {
  pg = await PGlite.create({
    ...durableOptions(directory),
    ...binaryBytes,
    parsers: { ...binaryBytes.parsers, ...Object.fromEntries(keptAsText.map((type) => [type, (text: string) => text])) },
  });
  port.postMessage({ open: true } satisfies FirstWord);
} catch (error) {
  const { message = String(error), ...about } = pick(error, ['message', 'code', 'errno', 'path', 'syscall']);
  port.postMessage({ open: false, fault: String(message), about } satisfies FirstWord);
  process.exit(1);
}

let inTransaction = false;
let lookedAtMs = 0;

async function answer({ id, question }: Asked): Promise<void> {
  try {
    const result = await carryOut(question);
    port?.postMessage({ id, result } satisfies Answer, result === null ? [] : buffersIn(result.rows));
    if (question.ask === 'close') process.exit(0);
  } catch (error) {
    port?.postMessage({ id, fault: error instanceof Error ? error.message : String(error), about: aboutOf(error) } satisfies Answer);
  }
}

async function carryOut(question: Question): Promise<QueryResult | null> {
  if (question.ask === 'close') {
    await pg.close();
    return null;
  }
  const { sql, params, rowMode } = question;
  const { rows, fields, affectedRows } = await pg.query(sql, [...params], { rowMode });
  if (sql === 'begin') inTransaction = true;
  if (sql === 'commit' || sql === 'rollback') inTransaction = false;
  return { rows, fields, ...(affectedRows === undefined ? {} : { affectedRows }) };
}

function buffersIn(rows: readonly unknown[]): ArrayBuffer[] {
  const found: ArrayBuffer[] = [];
  for (const row of rows) {
    for (const value of Object.values(row as object)) if (value instanceof Uint8Array) found.push(value.buffer as ArrayBuffer);
  }
  return found;
}

/** Without the query and its parameters, which hold the samples themselves. */
const aboutOf = (error: unknown) => pick(error, ['code', 'severity', 'detail', 'hint', 'schema', 'table', 'column', 'constraint', 'routine']);

function pick(error: unknown, names: readonly string[]): Record<string, string | number> {
  const fields = names.map((name) => [name, (error as Record<string, unknown>)[name]] as const);
  return Object.fromEntries(fields.filter((field): field is [string, string | number] => typeof field[1] === 'string' || typeof field[1] === 'number'));
}

async function checkpointIfDue(): Promise<void> {
  const now = performance.now();
  if (inTransaction || now - lookedAtMs < LOOK_EVERY_MS) return;
  lookedAtMs = now;
  const { rows: [row] } = await pg.query<{ bytes: number }>('select pg_wal_lsn_diff(pg_current_wal_lsn(), redo_lsn)::float8 as bytes from pg_control_checkpoint()');
  if ((row?.bytes ?? 0) > CHECKPOINT_AFTER_BYTES) await pg.exec('checkpoint');
}

let turn: Promise<void> = Promise.resolve();
port.on('message', (asked: Asked) => {
  turn = turn.then(() => answer(asked)).then(checkpointIfDue).catch(() => undefined); // the next look tries again
});

/**
 * The server is killed with SIGKILL in the middle of a stream, ten times, and started again on the same data. What it had
 * acknowledged is there afterwards, sample by sample, once and in order.
 *
 * A killed process proves that commits survive the process; that they survive the machine rests on fsync at every commit
 * (server/db/durable-node-fs.ts).
 */
import { type ChildProcess, spawn } from 'node:child_process';
import { once } from 'node:events';
import { mkdtempSync, rmSync } from 'node:fs';
import { createServer, type AddressInfo } from 'node:net';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { fileURLToPath } from 'node:url';
import { pino } from 'pino';
import { afterAll, beforeAll, expect, test } from 'vitest';
import { createTautbook } from '@server/app';
import { loadConfig } from '@server/config';
import { openDatabase } from '@server/db/engine';
import { readChunks } from '@server/ingest';
import { createSimulatedDevice, simulateRun, type SimulatedDevice } from '@server/simulator';
import { seededRandom } from '@server/simulator/random';
import { recordings } from '@server/db/schema';
import { channelNames, type Chunk } from '@shared/recording';
import { parseRig } from '@shared/rig';
import { heronFile } from '../support/app';

const KILLS = 10;
const root = fileURLToPath(new URL('../..', import.meta.url));
const silent = pino({ level: 'silent' });

let dataDir: string;
let port: number;
let key: string;
let server: ChildProcess | null = null;

/** Data with a rig and a device's key in them, as an administrator would have made them. */
beforeAll(async () => {
  dataDir = mkdtempSync(join(tmpdir(), 'tautbook-kill-'));
  const open = await openDatabase({ dataDir });
  await open.migrate();
  const book = await createTautbook({ config: loadConfig({ PORT: '0' }), open, log: silent });
  const administrator = await book.services.people.makePerson({ role: 'administrator', name: 'Keeper', email: 'keeper@lab.example', password: 'a long enough password' });
  const rig = await book.services.rigs.import(heronFile, '', administrator);
  ({ key } = await book.services.devices.register('bench', rig.rigId));
  await book.close();
  await open.close();
  port = await freePort();
});

afterAll(async () => {
  await kill();
  rmSync(dataDir, { recursive: true, force: true });
});

async function freePort(): Promise<number> {
  const listener = createServer().listen(0, '127.0.0.1');
  await once(listener, 'listening');
  const { port: found } = listener.address() as AddressInfo;
  listener.close();
  await once(listener, 'close');
  return found;
}

async function start(): Promise<void> {
  const child = spawn(process.execPath, ['--import', 'tsx', join(root, 'server/cli/start.ts')], {
    cwd: root, env: { ...process.env, DATA_DIR: dataDir, PORT: String(port), LOG_LEVEL: 'warn' }, stdio: ['ignore', 'pipe', 'pipe'],
  });
  server = child;
  let said = '';
  child.stderr.setEncoding('utf8').on('data', (piece: string) => { said += piece; });
  await new Promise<void>((resolve, reject) => {
    child.stdout.setEncoding('utf8').on('data', (piece: string) => { if (piece.includes('Tautbook is open at')) resolve(); });
    child.once('exit', (code, signal) => reject(new Error(`The server ended (${code ?? signal}): ${said}`)));
  });
}

async function kill(): Promise<void> {
  const child = server;
  if (child === null || child.exitCode !== null || child.signalCode !== null) return;
  child.kill('SIGKILL');
  await once(child, 'exit');
}

const acknowledged = (device: SimulatedDevice): number => device.report().runs[0]?.acknowledgedSamples ?? 0;
const acknowledgedBeyond = (device: SimulatedDevice, samples: number) => expect.poll(() => acknowledged(device), { timeout: 60_000, interval: 5 }).toBeGreaterThan(samples);

test('ten times killed in the middle of a stream: every acknowledged sample is kept, once and in order', async () => {
  const random = seededRandom(4680);
  const device = createSimulatedDevice({
    url: `http://127.0.0.1:${port}`, key, rig: { code: 'heron-8', revision: 1 }, channels: channelNames(8), keepSamples: true, reconnectMs: [20, 100], seed: 5,
    source: () => simulateRun({ rig: parseRig(heronFile), task: 'reach', durationS: 600, seed: 9, rateHz: 1000, chunkSamples: 25 }),
  });
  await start();
  await device.connect();
  const run = device.startUnfiled();
  const keptAtKill: number[] = [];
  for (let n = 0; n < KILLS; n += 1) {
    // Somewhere in the next second and a bit: before, in and after a chunk's turn.
    await acknowledgedBeyond(device, acknowledged(device) + Math.floor(random.between(50, 1300)));
    await kill();
    keptAtKill.push(acknowledged(device));
    await start();
  }
  await acknowledgedBeyond(device, acknowledged(device) + 500);
  await kill();
  const promised = acknowledged(device);
  const made = device.samplesOf(run);
  await device.close(0);
  expect(keptAtKill).toEqual([...keptAtKill].sort((a, b) => a - b));

  const open = await openDatabase({ dataDir });
  try {
    const [row, ...others] = await open.db.select().from(recordings);
    expect(others).toEqual([]);
    const stored: Chunk[] = [];
    for await (const chunk of readChunks(open.db, row?.id ?? '')) stored.push(chunk);
    const there = flat(stored);
    const sent = flat(made);
    expect(there.timesUs.length).toBeGreaterThanOrEqual(promised);
    expect(promised).toBeGreaterThan(KILLS * 50);
    expect([...there.first]).toEqual(Array.from(there.first, (_, i) => i));
    expect(Buffer.compare(bytes(there.timesUs), bytes(sent.timesUs.subarray(0, there.timesUs.length)))).toBe(0);
    there.columns.forEach((column, c) => expect(Buffer.compare(bytes(column), bytes((sent.columns[c] as Float32Array).subarray(0, column.length)))).toBe(0));
  } finally {
    await open.close();
  }
}, 240_000);

const bytes = (array: Float64Array | Float32Array): Buffer => Buffer.from(array.buffer, array.byteOffset, array.byteLength);

/** Chunks end to end. Times are from the run's start, as both sides keep them. */
function flat(chunks: readonly Chunk[]): { timesUs: Float64Array; first: Float64Array; columns: Float32Array[] } {
  const count = chunks.reduce((sum, chunk) => sum + chunk.count, 0);
  const timesUs = new Float64Array(count);
  const first = new Float64Array(count);
  const columns = channelNames(8).map(() => new Float32Array(count));
  let at = 0;
  for (const chunk of chunks) {
    timesUs.set(chunk.timesUs.subarray(0, chunk.count), at);
    for (let i = 0; i < chunk.count; i += 1) first[at + i] = chunk.first + i;
    columns.forEach((column, c) => column.set((chunk.columns[c] as Float32Array).subarray(0, chunk.count), at));
    at += chunk.count;
  }
  return { timesUs, first, columns };
}

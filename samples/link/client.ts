/**
 * A device for Tautbook in TypeScript: streams a recording file over the device link, as a rig's own program would.
 *
 *   npx tsx client.ts --url ws://127.0.0.1:4680 --key KEY --rig heron-8 --revision 1 RECORDING.csv[.gz]
 *
 * Needs the packages ws and msgpackr, nothing of Tautbook itself. Waits to be armed, or with --unfiled begins at once. What is
 * not acknowledged is kept and sent again after a break. README.md beside this file describes the link.
 *
 * A rig's program takes `Device` as it is and feeds it from its own loop. It is a recorder: it stops nothing and protects
 * nobody.
 */
import { randomUUID } from 'node:crypto';
import { readFileSync } from 'node:fs';
import { setTimeout as wait } from 'node:timers/promises';
import { parseArgs } from 'node:util';
import { gunzipSync } from 'node:zlib';
import { Packr, unpack } from 'msgpackr';
import WebSocket from 'ws';

const BATCH = 25; // samples; about 40 frames a second at 1 kHz
/** Maps as maps, so that any MessagePack library reads them. */
const packr = new Packr({ useRecords: false });

/** The device's own clock, µs: any origin, never set back. */
const monotonicUs = (): number => Number(process.hrtime.bigint() / 1000n);

interface Batch { type: 'batch'; run: string; n: number; first: number; count: number; t0Us: number; dtUs: Uint8Array; data: Uint8Array }
interface Heard { type: string; id?: number; run?: string; next?: number; ended?: boolean; trial?: string; unacked?: number; code?: string; message?: string; fatal?: boolean; n?: number; limits?: { unacked: number }; resume?: { run: string; next: number }[] }

class Run {
  readonly name = randomUUID();
  readonly batches: Batch[] = [];
  durable = 0;
  sent = 0;
  samples = 0;
  begun = false;
  ended = false;
  reason: 'done' | 'stopped' | null = null;

  constructor(readonly trial: string | null, readonly startUs: number) {}

  /** @param timesUs since the run's start @param columns channel after channel; NaN is not measured */
  add(first: number, timesUs: readonly number[], columns: readonly (readonly number[])[]): void {
    const count = timesUs.length;
    const t0 = timesUs[0] ?? 0;
    const dt = Buffer.alloc(4 * count);
    timesUs.forEach((t, i) => dt.writeUInt32LE(Math.round(t - t0), 4 * i));
    const data = Buffer.alloc(4 * count * columns.length);
    columns.forEach((column, c) => column.forEach((value, i) => data.writeFloatLE(value, 4 * (c * count + i))));
    this.batches.push({ type: 'batch', run: this.name, n: this.batches.length, first, count, t0Us: this.startUs + t0, dtUs: dt, data });
    this.samples += count;
  }
}

class Device {
  run: Run | null = null;
  trial: string | null = null;
  stopped = false;
  private socket: WebSocket | null = null;
  private unacked = 16;
  private retryMs = 200;
  private settle: { resolve(): void; reject(error: Error): void } | null = null;
  private arrived: (() => void) | null = null;

  constructor(private readonly url: string, private readonly key: string, private readonly about: { rig: string; revision: number; rateHz: number; channels: readonly string[] }) {}

  /** Resolves when the run is closed by the server. */
  serve(): Promise<void> {
    return new Promise((resolve, reject) => {
      this.settle = { resolve, reject };
      this.connect();
    });
  }

  armed(): Promise<void> {
    return new Promise((resolve) => { this.arrived = resolve; });
  }

  start(trial: string | null): Run {
    this.run = new Run(trial, monotonicUs());
    if (this.socket?.readyState === WebSocket.OPEN) this.begin();
    return this.run;
  }

  /** Sends what may be in flight now, and the end once every batch is on its way. */
  pump(): void {
    const { run } = this;
    if (run === null || !run.begun || this.socket?.readyState !== WebSocket.OPEN) return;
    while (run.sent < run.batches.length && run.sent - run.durable < this.unacked) {
      this.send(run.batches[run.sent] as Batch);
      run.sent += 1;
    }
    if (run.reason !== null && run.sent === run.batches.length) this.send({ type: 'end', run: run.name, batches: run.batches.length, samples: run.samples, reason: run.reason });
  }

  private connect(): void {
    const socket = new WebSocket(`${this.url.replace(/\/$/, '')}/link/v1`, 'tautbook.link.v1', { headers: { authorization: `Bearer ${this.key}` } });
    this.socket = socket;
    socket.on('open', () => {
      const { rig, revision, rateHz, channels } = this.about;
      this.send({ type: 'hello', link: 1, rig: { code: rig, revision }, rateHz, channels, firmware: 'client.ts', deviceUs: monotonicUs() });
      this.retryMs = 200;
    });
    socket.on('message', (frame: Buffer) => {
      this.hear(unpack(frame) as Heard);
      this.pump();
    });
    socket.on('unexpected-response', (_request, response) => {
      if ([401, 403, 426].includes(response.statusCode ?? 0)) this.settle?.reject(new Error(`The server refused the device: status ${response.statusCode}. Check its key.`));
      socket.terminate();
    });
    socket.on('error', () => undefined); // a broken link closes, and closing is handled
    socket.on('close', () => {
      const { run } = this;
      if (run?.ended) return this.settle?.resolve();
      if (run) {
        run.begun = false;
        run.sent = run.durable;
      }
      setTimeout(() => this.connect(), this.retryMs);
      this.retryMs = Math.min(5000, this.retryMs * 2);
    });
  }

  private send(message: object): void {
    this.socket?.send(packr.pack(message));
  }

  private begin(): void {
    if (this.run) this.send({ type: 'begin', trial: this.run.trial, run: this.run.name, startUs: this.run.startUs });
  }

  private hear(message: Heard): void {
    const { run } = this;
    const ours = run !== null && message.run === run.name;
    if (message.type === 'clock') this.send({ type: 'clock', id: message.id, deviceUs: monotonicUs() });
    else if (message.type === 'welcome') {
      this.unacked = message.limits?.unacked ?? this.unacked;
      const known = message.resume?.find((one) => one.run === run?.name);
      if (run && known) {
        run.begun = true;
        run.durable = known.next;
        run.sent = known.next;
      } else if (run) this.begin();
    } else if (message.type === 'arm') {
      this.trial = message.trial ?? null;
      this.arrived?.();
    } else if (message.type === 'stop') this.stopped = true;
    else if (message.type === 'pace') this.unacked = message.unacked ?? this.unacked;
    else if (message.type === 'ack' && ours) {
      run.begun = true;
      run.durable = Math.max(run.durable, message.next ?? 0);
      run.sent = Math.max(run.sent, run.durable);
      if (message.ended) this.close(run);
    } else if (message.type === 'fault') {
      console.error(`${message.code}: ${message.message}`);
      if (message.code === 'BATCH_ORDER' && run) run.sent = message.n ?? run.durable;
      else if (message.code === 'RUN_CLOSED' && run) this.close(run);
      else if (message.fatal) this.settle?.reject(new Error(`The server ended the link: ${message.code}.`));
    }
  }

  private close(run: Run): void {
    run.ended = true;
    this.socket?.close();
  }
}

function readRecording(path: string): { channels: string[]; table: number[][] } {
  const bytes = readFileSync(path);
  const [header = '', ...lines] = (path.endsWith('.gz') ? gunzipSync(bytes) : bytes).toString().trimEnd().split('\n');
  return { channels: header.trim().split(',').slice(1), table: lines.map((line) => line.split(',').map((field) => (field.trim() === '' ? Number.NaN : Number(field)))) };
}

/** Rows for a batch each: at most BATCH, and none with a gap inside. */
function* pieces(table: readonly (readonly number[])[], rateHz: number): Generator<(readonly number[])[]> {
  let part: (readonly number[])[] = [];
  for (const row of table) {
    const step = (row[0] ?? 0) - (part.at(-1)?.[0] ?? row[0] ?? 0);
    if (part.length === BATCH || step > 1.5 / rateHz) {
      yield part;
      part = [];
    }
    part.push(row);
  }
  if (part.length > 0) yield part;
}

const { values, positionals } = parseArgs({
  allowPositionals: true,
  options: { url: { type: 'string' }, key: { type: 'string' }, rig: { type: 'string' }, revision: { type: 'string', default: '1' }, unfiled: { type: 'boolean', default: false }, fast: { type: 'boolean', default: false } },
});
const [recording] = positionals;
if (!values.url || !values.key || !values.rig || !recording) {
  console.error('client.ts --url URL --key KEY --rig CODE [--revision N] [--unfiled] [--fast] RECORDING.csv[.gz]');
  process.exit(2);
}
const { channels, table } = readRecording(recording);
const firstS = table[0]?.[0] ?? 0;
const steps = table.slice(1).map((row, i) => (row[0] ?? 0) - (table[i]?.[0] ?? 0)).sort((a, b) => a - b);
const rateHz = Math.round(1000 / (steps[steps.length >> 1] ?? 0.001)) / 1000;

const device = new Device(values.url, values.key, { rig: values.rig, revision: Number(values.revision), rateHz, channels });
const served = device.serve();
served.catch((error: unknown) => {
  console.error(error instanceof Error ? error.message : error);
  process.exit(1);
});
if (!values.unfiled) await device.armed();
const run = device.start(values.unfiled ? null : device.trial);
const begunMs = performance.now();
for (const part of pieces(table, rateHz)) {
  if (device.stopped) break;
  const last = part.at(-1)?.[0] ?? 0;
  // Fast, the loop still gives way, so that the link is heard.
  await wait(values.fast ? 0 : Math.max(0, begunMs + (last - firstS) * 1000 - performance.now()));
  // A hole in the file's times is a gap: `first` steps over the samples that are missing.
  const before = run.batches.at(-1);
  const first = Math.max(Math.round(((part[0]?.[0] ?? 0) - firstS) * rateHz), before ? before.first + before.count : 0);
  run.add(first, part.map((row) => ((row[0] ?? 0) - firstS) * 1e6), channels.map((_, c) => part.map((row) => row[c + 1] ?? Number.NaN)));
  device.pump();
}
run.reason = device.stopped ? 'stopped' : 'done';
device.pump();
await served;
console.log(`${run.samples} samples in ${run.batches.length} batches are in the book as run ${run.name}.`);
process.exit(0);

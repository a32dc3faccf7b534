/**
 * The recorder: growing runs of all devices, and the group commit that makes their batches durable.
 *
 * One commit at a time carries what all runs have. Acknowledgements go out only after it. When a commit fails, what it
 * carried is kept and tried again with a growing wait, each run by itself, so that one that cannot be stored does not hold
 * up the others; devices are asked to hold back and keep what is not acknowledged.
 */
import { setImmediate as breathe } from 'node:timers/promises';
import type { Logger } from 'pino';
import type { LinkOptions } from '@shared/link';
import type { Database } from '../db/engine';
import type { Bus } from '../live/bus';
import { EndsTold } from './ends-told';
import type { TrialBook } from './ports';
import { closeRecording, commitRuns, growingRuns, type RunRow, sweepTail, tailOf } from './queries';
import { asChunk, unpackTail } from './received-batch';
import { Run, type RunLoad } from './run';
import { flaggerOf, foldFlags, tellFlags } from './run-flags';
import { readEncodedChunks } from './store';
import { faultText } from './fault-text';
import { unpackChunk } from './zlib-codec';

export interface RunListener {
  /** Everything below `durable` of the run is durable. */
  acknowledged(run: Run): void;
  /** The run's recording is closed. */
  ended(run: Run): void;
  /** Storage failed (once an outage), and came back. */
  storageDown(): void;
  storageBack(): void;
}

export interface RecorderParts {
  db: Database;
  bus: Bus;
  book: TrialBook;
  log: Logger;
  options: LinkOptions;
}

interface Load { readonly run: Run; readonly load: RunLoad }

export class Recorder {
  /** By device and run name. */
  private readonly runs = new Map<string, Run>();
  private readonly refreshing = new Map<string, Promise<void>>();
  private readonly listeners = new Map<string, RunListener>();
  private readonly ends: EndsTold;
  private timer: NodeJS.Timeout | undefined;
  private committing: Promise<void> | null = null;
  private waitMs: number;
  /** Above 0 while storage is down. */
  private retryMs = 0;
  private stopped = false;
  private sweptAtMs = performance.now();
  private tailDirty = false;
  private readonly lostTimer: NodeJS.Timeout;

  constructor(private readonly parts: RecorderParts) {
    this.waitMs = parts.options.commitEveryMs;
    this.ends = new EndsTold(parts.book, parts.log, parts.options);
    this.lostTimer = setInterval(() => this.closeLost(), Math.min(30_000, parts.options.lostAfterMs / 2));
    this.lostTimer.unref();
  }

  /** Takes up every run that was growing when the server stopped. */
  async start(): Promise<void> {
    const { db, book } = this.parts;
    await this.ends.catchUp(db);
    for (const row of await growingRuns(db)) {
      const run = await this.adopt(row);
      if (run.trialId === null) continue;
      await book.began(run.trialId, run.id); // in case the server stopped between the recording's first line and the trial's
      await book.away(run.trialId);
    }
  }

  /** Goes on with a recording from what is stored of it. Nobody finds the run before it is whole. */
  private async adopt(row: RunRow): Promise<Run> {
    const { db, log } = this.parts;
    const run = await this.runOf(row);
    for await (const data of readEncodedChunks(db, row.id)) {
      const chunk = unpackChunk(data);
      run.restoreChunk(chunk);
      foldFlags(run, chunk, log);
      await breathe();
    }
    for (const { data } of await tailOf(db, row.id)) {
      const batches = unpackTail(data);
      run.restoreTail(batches);
      for (const batch of batches) foldFlags(run, asChunk(batch, 0), log);
    }
    this.runs.set(key(row.deviceId, row.run), run);
    return run;
  }

  /** A device is back: another server of the same database may have recorded it meanwhile, so what is stored counts. */
  refresh(deviceId: string): Promise<Run[]> {
    // A device may be back twice before its runs are read: one after the other, or a run would be taken up half.
    const turn = (this.refreshing.get(deviceId) ?? Promise.resolve()).then(() => this.refreshNow(deviceId));
    const settled = turn.then(() => undefined, () => undefined);
    this.refreshing.set(deviceId, settled);
    void settled.then(() => { if (this.refreshing.get(deviceId) === settled) this.refreshing.delete(deviceId); });
    return turn;
  }

  private async refreshNow(deviceId: string): Promise<Run[]> {
    const stored = await growingRuns(this.parts.db, deviceId);
    for (const run of this.ofDevice(deviceId)) {
      const row = stored.find(({ id }) => id === run.id);
      if (run.ending === null && (row === undefined || row.nextBatch > run.durable) && this.committing === null) this.runs.delete(key(run.deviceId, run.run));
    }
    for (const row of stored) if (this.find(deviceId, row.run) === undefined) await this.adopt(row);
    return this.ofDevice(deviceId).filter((run) => run.ending === null);
  }

  async add(row: RunRow): Promise<Run> {
    const run = await this.runOf(row);
    this.runs.set(key(row.deviceId, row.run), run);
    return run;
  }

  private async runOf(row: RunRow): Promise<Run> {
    const run = new Run(row, this.parts.options);
    run.flagger = await flaggerOf(this.parts.db, row);
    return run;
  }

  find(deviceId: string, run: string): Run | undefined {
    return this.runs.get(key(deviceId, run));
  }

  ofDevice(deviceId: string): Run[] {
    return [...this.runs.values()].filter((run) => run.deviceId === deviceId);
  }

  ofTrial(trialId: string): Run | undefined {
    return [...this.runs.values()].find((run) => run.trialId === trialId);
  }

  listen(deviceId: string, listener: RunListener): () => void {
    this.listeners.set(deviceId, listener);
    return () => {
      if (this.listeners.get(deviceId) === listener) this.listeners.delete(deviceId);
    };
  }

  /** Bytes that wait for a commit, of all runs. */
  get waitingBytes(): number {
    let sum = 0;
    for (const run of this.runs.values()) sum += run.freshBytes;
    return sum;
  }

  get storageIsDown(): boolean {
    return this.retryMs > 0;
  }

  /** Something arrived: a commit follows soon. */
  wake(): void {
    if (this.timer !== undefined || this.committing !== null || this.stopped) return;
    this.timer = setTimeout(() => {
      this.timer = undefined;
      void this.commit();
    }, this.retryMs || this.waitMs);
  }

  private async commit(): Promise<void> {
    const startedMs = performance.now();
    this.committing = this.commitOnce();
    await this.committing;
    this.committing = null;
    const { commitEveryMs, commitEveryMostMs, commitShare } = this.parts.options;
    this.waitMs = Math.min(commitEveryMostMs, Math.max(commitEveryMs, (performance.now() - startedMs) * (1 / commitShare - 1)));
    if ([...this.runs.values()].some((run) => run.hasWork || run.ending !== null)) this.wake();
  }

  private async commitOnce(): Promise<void> {
    try {
      const loads = await this.loads();
      const held = this.retryMs > 0 ? await this.storeOneByOne(loads) : await this.storeTogether(loads);
      for (const run of [...this.runs.values()]) if (run.ending !== null && !run.hasWork) await this.close(run);
      if (held !== null) throw held;
      if (this.retryMs > 0) {
        this.retryMs = 0;
        this.parts.log.info('storing works again');
        for (const listener of this.listeners.values()) listener.storageBack();
      }
      await this.sweep();
    } catch (error) {
      this.failed(error);
    }
  }

  /** Encoding a chunk takes a few milliseconds: between two of them others may go on. */
  private async loads(): Promise<Load[]> {
    const loads: Load[] = [];
    let sinceMs = performance.now();
    for (const run of [...this.runs.values()]) {
      const load = run.load();
      if (load !== null) loads.push({ run, load });
      if (performance.now() - sinceMs > 5) {
        await breathe();
        sinceMs = performance.now();
      }
    }
    return loads;
  }

  private async storeTogether(loads: readonly Load[]): Promise<null> {
    if (loads.length > 0) await commitRuns(this.parts.db, together(loads.map(({ load }) => load)));
    for (const each of loads) this.acknowledge(each);
    return null;
  }

  /** @returns what the last run that could not be stored failed with */
  private async storeOneByOne(loads: readonly Load[]): Promise<unknown> {
    let held: unknown = null;
    for (const each of loads) {
      try {
        await commitRuns(this.parts.db, together([each.load]));
        this.acknowledge(each);
      } catch (error) {
        held = error;
      }
    }
    return held;
  }

  private acknowledge({ run, load }: Load): void {
    run.committed();
    if (load.tail !== null || load.replacedBelow !== null) this.tailDirty = true;
    this.listeners.get(run.deviceId)?.acknowledged(run);
  }

  private failed(error: unknown): void {
    const { retryFirstMs, retryMostMs } = this.parts.options;
    if (this.retryMs === 0) {
      this.parts.log.error({ message: faultText(error) }, 'storing failed; trying again');
      for (const listener of this.listeners.values()) listener.storageDown();
    }
    this.retryMs = Math.min(retryMostMs, this.retryMs === 0 ? retryFirstMs : this.retryMs * 2);
  }

  private async close(run: Run): Promise<void> {
    const { db, bus } = this.parts;
    const reason = run.ending ?? 'lost';
    const { values, pyramid } = run.finish();
    const wall = run.wall === null ? {} : { startedAt: new Date(run.wall.serverUs / 1000), startUncertaintyUs: run.wall.uncertaintyUs };
    const closed = await closeRecording(db, run.id, run.durable, { ...values, ...wall, gaps: run.gaps, marks: run.marks, endReason: reason, closedAt: new Date() }, pyramid);
    this.runs.delete(key(run.deviceId, run.run));
    // Another server of the same database went on with it: it is theirs to close.
    if (!closed) return;
    if (run.trialId !== null) {
      tellFlags(run, bus, true);
      await this.ends.tell(run.trialId, run.id, reason);
    }
    bus.tell('recordingClosed', { recordingId: run.id, trialId: run.trialId });
    this.listeners.get(run.deviceId)?.ended(run);
  }

  private async sweep(): Promise<void> {
    const now = performance.now();
    if (!this.tailDirty || now - this.sweptAtMs < this.parts.options.sweepEveryMs) return;
    this.sweptAtMs = now;
    this.tailDirty = false;
    await sweepTail(this.parts.db);
  }

  /** A run of which nothing came for too long is closed with what is durable, and marked so: its device is away or forgot it. */
  private closeLost(): void {
    const now = performance.now();
    for (const run of this.runs.values()) {
      if (run.ending === null && now - run.heardAtMs > this.parts.options.lostAfterMs) this.end(run, 'lost');
    }
  }

  end(run: Run, reason: NonNullable<Run['ending']>): void {
    run.ending = reason;
    this.wake();
  }

  /** Makes durable what has arrived, and stops. */
  async stop(): Promise<void> {
    this.stopped = true;
    clearInterval(this.lostTimer);
    clearTimeout(this.timer);
    this.timer = undefined;
    await this.committing;
    await this.commitOnce();
    this.ends.stop();
  }
}

const key = (deviceId: string, run: string) => `${deviceId} ${run}`;

const together = (loads: readonly RunLoad[]) => ({
  progress: loads.map((load) => load.progress),
  tail: loads.flatMap((load) => load.tail ?? []),
  chunks: loads.flatMap((load) => load.chunks),
  pyramid: loads.flatMap((load) => load.pyramid),
  replaced: loads.flatMap((load) => (load.replacedBelow === null ? [] : [{ recordingId: load.progress.id, below: load.replacedBelow }])),
});

/**
 * The recorder: growing runs of all devices, and the group commit that makes their batches durable.
 *
 * One commit at a time carries what all runs have. Acknowledgements go out only after it. When a commit fails, what it
 * carried is kept and tried again with a growing wait; devices are asked to hold back and keep what is not acknowledged.
 */
import type { Logger } from 'pino';
import { createFlagger, defaultRules } from '@shared/flags';
import { parseChannels } from '@shared/recording';
import { rigModel } from '@shared/rig';
import type { LinkOptions } from '@shared/link';
import type { Database } from '../db/engine';
import type { Bus } from '../live/bus';
import type { TrialBook } from './ports';
import { closeRecording, commitRuns, growingRuns, type RecordingRow, rigOfRevision, tailOf } from './queries';
import { asChunk, unpackTail } from './received-batch';
import { Run, type RunLoad } from './run';
import { readEncodedChunks } from './store';
import { unpackChunk } from './zlib-codec';

export interface RunListener {
  /** Everything below `next` is durable. */
  acknowledged(run: Run): void;
  closed(run: Run): void;
  /** Storage failed (once per outage), and came back. */
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

export class Recorder {
  /** By device and run name. */
  private readonly runs = new Map<string, Run>();
  private readonly listeners = new Map<string, RunListener>();
  private timer: NodeJS.Timeout | undefined;
  private committing: Promise<void> | null = null;
  private retryMs = 0;
  private stopped = false;
  private readonly lostTimer: NodeJS.Timeout;

  constructor(private readonly parts: RecorderParts) {
    this.lostTimer = setInterval(() => this.closeLost(), Math.min(60_000, parts.options.lostAfterMs));
    this.lostTimer.unref();
  }

  /** Takes up every run that was growing when the server stopped. */
  async start(): Promise<void> {
    for (const row of await growingRuns(this.parts.db)) {
      const run = await this.add(row);
      for await (const data of readEncodedChunks(this.parts.db, row.id)) {
        const chunk = unpackChunk(data);
        run.restoreChunk(chunk);
        run.ended.push(...(run.flagger?.step(chunk) ?? []).map((flag) => ({ ...flag, open: false })));
      }
      for (const { data } of await tailOf(this.parts.db, row.id)) {
        const batches = unpackTail(data);
        run.restoreTail(batches);
        for (const batch of batches) run.ended.push(...(run.flagger?.step(asChunk(batch, 0)) ?? []).map((flag) => ({ ...flag, open: false })));
      }
      if (run.trialId !== null) await this.parts.book.away(run.trialId);
    }
  }

  async add(row: RecordingRow): Promise<Run> {
    const run = new Run(row, this.parts.options);
    run.heardAtMs = performance.now();
    this.runs.set(key(row.deviceId, row.run), run);
    const rig = rigModel(await rigOfRevision(this.parts.db, row.rigRevisionId));
    const channels = parseChannels(row.channels, rig.cableCount);
    if (channels.ok && run.trialId !== null) run.flagger = createFlagger(rig, channels.map, row.rateHz, defaultRules(rig));
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

  /** Something arrived: a commit follows soon. */
  wake(): void {
    if (this.timer !== undefined || this.committing !== null || this.stopped) return;
    this.timer = setTimeout(() => {
      this.timer = undefined;
      void this.commit();
    }, this.retryMs || this.parts.options.commitEveryMs);
  }

  private async commit(): Promise<void> {
    this.committing = this.commitOnce();
    await this.committing;
    this.committing = null;
    if ([...this.runs.values()].some((run) => run.hasWork || run.ending)) this.wake();
  }

  private async commitOnce(): Promise<void> {
    const loads = [...this.runs.values()].flatMap((run) => {
      const load = run.load();
      return load === null ? [] : [{ run, load }];
    });
    try {
      if (loads.length > 0) await commitRuns(this.parts.db, together(loads.map(({ load }) => load)));
      if (this.retryMs > 0) {
        this.retryMs = 0;
        for (const listener of this.listeners.values()) listener.storageBack();
      }
      for (const { run } of loads) {
        run.committed();
        this.listeners.get(run.deviceId)?.acknowledged(run);
      }
      for (const run of this.runs.values()) if (run.ending !== null && !run.hasWork) await this.close(run);
    } catch (error) {
      const { retryFirstMs, retryMostMs } = this.parts.options;
      if (this.retryMs === 0) {
        this.parts.log.error({ message: error instanceof Error ? (error.cause instanceof Error ? error.cause.message : error.message).slice(0, 300) : 'unknown' }, 'storing failed; trying again');
        for (const listener of this.listeners.values()) listener.storageDown();
      }
      this.retryMs = Math.min(retryMostMs, this.retryMs === 0 ? retryFirstMs : this.retryMs * 2);
    }
  }

  private finished = new Map<string, ReturnType<Run['finish']>>();

  private async close(run: Run): Promise<void> {
    const { db, book, bus } = this.parts;
    const reason = run.ending?.reason ?? 'lost';
    // Finished once: a close that failed is tried again with the same values.
    const result = this.finished.get(run.id) ?? run.finish();
    this.finished.set(run.id, result);
    await closeRecording(db, run.id, { ...result.values, marks: run.marks, endReason: reason, closedAt: new Date() }, result.pyramid);
    this.finished.delete(run.id);
    run.closed = true;
    this.runs.delete(key(run.deviceId, run.run));
    if (run.trialId !== null) {
      bus.tell('liveFlags', { trialId: run.trialId, flags: [...run.ended, ...(run.flagger?.finish() ?? []).map((flag) => ({ ...flag, open: false }))] });
      await book.stopped(run.trialId, run.id, reason);
    }
    bus.tell('recordingClosed', { recordingId: run.id, trialId: run.trialId });
    this.listeners.get(run.deviceId)?.closed(run);
  }

  /** A run whose device stayed away too long is closed with what is durable, and marked so. */
  private closeLost(): void {
    const now = performance.now();
    for (const run of this.runs.values()) {
      if (run.ending === null && !this.listeners.has(run.deviceId) && now - run.heardAtMs > this.parts.options.lostAfterMs) {
        run.ending = { reason: 'lost', acknowledge: false };
        this.wake();
      }
    }
  }

  /** Makes durable what has arrived, and stops. */
  async stop(): Promise<void> {
    this.stopped = true;
    clearInterval(this.lostTimer);
    clearTimeout(this.timer);
    await this.committing;
    await this.commitOnce();
  }
}

const key = (deviceId: string, run: string) => `${deviceId} ${run}`;

const together = (loads: readonly RunLoad[]) => ({
  progress: loads.map((load) => load.progress),
  tail: loads.flatMap((load) => load.tail ?? []),
  chunks: loads.flatMap((load) => load.chunk ?? []),
  pyramid: loads.flatMap((load) => load.pyramid),
  replaced: loads.flatMap((load) => (load.replacedBelow === null ? [] : [{ recordingId: load.progress.id, below: load.replacedBelow }])),
});

/**
 * One growing recording in memory: what came, what is durable, what the next commit carries.
 *
 * A batch goes fresh -> (commit) -> open: durable in the tail -> (commit) -> part of a chunk. A commit that failed is
 * tried again with the same load, so sealing a chunk happens once.
 */
import type { DeviceId, RecordingId, TrialId } from '@shared/api/common';
import type { Flagger } from '@shared/flags';
import type { LinkOptions } from '@shared/link';
import type { LiveFlag } from '../live/bus';
import { takeBatch } from './batch-check';
import type { ChunkRow, Progress, PyramidRow, RecordingRow, TailRow } from './queries';
import { asChunk, joinBatches, packTail, type ReceivedBatch } from './received-batch';
import { createSealer, type Sealer } from './seal';

export interface RunLoad {
  readonly progress: Progress;
  readonly tail: TailRow | null;
  readonly chunk: ChunkRow | null;
  readonly pyramid: readonly PyramidRow[];
  /** Tail rows below this batch are replaced by the chunk; null without one. */
  readonly replacedBelow: number | null;
  /** Every batch below is durable once this load is. */
  readonly next: number;
}

export class Run {
  readonly id: RecordingId;
  readonly deviceId: DeviceId;
  readonly run: string;
  readonly trialId: TrialId | null;
  readonly startUs: number;
  readonly channels: readonly string[];
  readonly rateHz: number;
  /** Batch that is wanted next. */
  nextBatch: number;
  /** Every batch below is durable. */
  durable: number;
  nextSample: number;
  lastUs: number;
  marks: RecordingRow['marks'];
  flagger: Flagger | null = null;
  /** Flags that ended so far, and how many open ones the rooms were told last. */
  ended: LiveFlag[] = [];
  openTold = 0;
  /** The device said `end`; closed when everything before is durable. */
  ending: { reason: 'done' | 'stopped' | 'fault' | 'lost'; acknowledge: boolean } | null = null;
  closed = false;
  /** Server's monotonic ms when something came last. */
  heardAtMs = 0;
  freshBytes = 0;

  private readonly sealer: Sealer;
  private gaps: RecordingRow['gaps'];
  private gapsChanged = false;
  private marksChanged = false;
  private fresh: ReceivedBatch[] = [];
  private open: ReceivedBatch[] = [];
  /** Samples in sealed chunks. */
  private sealed = 0;
  private samples: number;
  private moving: { batches: ReceivedBatch[]; load: RunLoad } | null = null;

  constructor(row: RecordingRow, private readonly options: LinkOptions) {
    this.id = row.id as RecordingId;
    this.deviceId = row.deviceId as DeviceId;
    this.run = row.run;
    this.trialId = row.trialId as TrialId | null;
    this.startUs = row.startUs;
    this.channels = row.channels;
    this.rateHz = row.rateHz;
    this.nextBatch = row.nextBatch;
    this.durable = row.nextBatch;
    this.nextSample = row.nextSample;
    this.lastUs = row.samples === 0 ? -1 : row.lastUs;
    this.samples = row.samples;
    this.gaps = row.gaps;
    this.marks = row.marks;
    this.sealer = createSealer(row.id, row.channels, row.rateHz, options.gapsListed);
  }

  /** Goes on after a restart: stored chunks first, then what lay in the tail. */
  restoreChunk(chunk: Parameters<Sealer['replay']>[0]): void {
    this.sealer.replay(chunk);
    this.sealed += chunk.count;
  }

  restoreTail(batches: readonly ReceivedBatch[]): void {
    this.open.push(...batches);
  }

  /** @returns the batch as it was taken in and its samples' first stored index, or what is wrong with it */
  take(batch: Parameters<typeof takeBatch>[0]): ReturnType<typeof takeBatch> {
    const taken = takeBatch(batch, { rateHz: this.rateHz, channels: this.channels.length, startUs: this.startUs, nextSample: this.nextSample, lastUs: this.lastUs }, this.options);
    if ('code' in taken) return taken;
    this.listGap(taken);
    this.fresh.push(taken);
    this.freshBytes += taken.values.byteLength + taken.timesUs.byteLength;
    this.nextBatch = taken.n + 1;
    this.nextSample = taken.first + taken.count;
    this.lastUs = taken.timesUs[taken.count - 1] ?? this.lastUs;
    return taken;
  }

  /** Stored index of the first sample of a batch that was just taken. */
  chunkOf(batch: ReceivedBatch) {
    const chunk = asChunk(batch, this.samples);
    this.samples += batch.count;
    return chunk;
  }

  mark(atS: number, label: string): void {
    if (this.marks.some((each) => each.atS === atS && each.label === label)) return;
    if (this.marks.length >= this.options.marksKept) return;
    this.marks = [...this.marks, { atS, label }];
    this.marksChanged = true;
  }

  private listGap({ timesUs }: ReceivedBatch): void {
    const periodUs = 1e6 / this.rateHz;
    let before = this.lastUs;
    for (const at of timesUs) {
      if (before >= 0 && at - before > 1.5 * periodUs && this.gaps.length < this.options.gapsListed) {
        this.gaps = [...this.gaps, { startS: before / 1e6, endS: at / 1e6, missing: Math.max(1, Math.round((at - before) / periodUs) - 1) }];
        this.gapsChanged = true;
      }
      before = at;
    }
  }

  get hasWork(): boolean {
    return this.moving !== null || this.fresh.length > 0 || this.marksChanged || (this.ending !== null && this.open.length > 0);
  }

  /** What the next commit should make durable; the same again until `committed`. Null when there is nothing. */
  load(): RunLoad | null {
    if (this.moving) return this.moving.load;
    if (!this.hasWork) return null;
    const batches = this.fresh;
    this.fresh = [];
    this.freshBytes = 0;
    const all = [...this.open, ...batches];
    const count = all.reduce((sum, batch) => sum + batch.count, 0);
    const due = count > 0 && (count >= this.options.chunkS * this.rateHz || this.ending !== null);
    const next = (batches.at(-1)?.n ?? this.durable - 1) + 1;
    const last = batches.at(-1);
    const sealed = due ? this.sealer.seal(joinBatches(all, this.channels.length, this.sealed)) : null;
    const samples = this.sealed + count;
    if (due) {
      this.sealed += count;
      this.open = [];
    }
    const first = batches[0];
    const load: RunLoad = {
      progress: {
        id: this.id, nextBatch: next, samples,
        nextSample: last ? last.first + last.count : this.nextSample,
        lastUs: last ? (last.timesUs[last.count - 1] ?? 0) : Math.max(0, this.lastUs),
        gaps: this.gapsChanged ? this.gaps : null,
        marks: this.marksChanged ? this.marks : null,
      },
      tail: sealed || !first ? null : { recordingId: this.id, batch: first.n, batches: batches.length, data: packTail(batches) },
      chunk: sealed?.chunk ?? null,
      pyramid: sealed?.pyramid ?? [],
      replacedBelow: sealed ? next : null,
      next,
    };
    this.gapsChanged = false;
    this.marksChanged = false;
    this.moving = { batches: sealed ? [] : batches, load };
    return load;
  }

  committed(): void {
    if (!this.moving) return;
    this.open.push(...this.moving.batches);
    this.durable = this.moving.load.next;
    this.moving = null;
  }

  finish(): ReturnType<Sealer['finish']> {
    return this.sealer.finish();
  }
}

/**
 * One growing recording in memory: what came, what is durable, what the next commit carries.
 *
 * A batch goes fresh -> (commit) -> open: durable in the tail -> (commit) -> part of a chunk. A commit that failed is
 * tried again with the same load, so sealing a chunk happens once, and storing the same load twice stores it once.
 */
import type { DeviceId, RecordingId, TrialId } from '@shared/api/common';
import type { Chunk } from '@shared/recording';
import type { Flagger } from '@shared/flags';
import type { LinkOptions, WallTime } from '@shared/link';
import type { LiveFlag } from '../live/bus';
import { takeBatch } from './batch-check';
import { listGaps } from './gaps';
import type { ChunkRow, Progress, PyramidRow, RecordingRow, RunRow, TailRow } from './queries';
import { asChunk, joinBatches, packTail, type ReceivedBatch } from './received-batch';
import { createSealer, type Finished, type Sealer } from './seal';

export interface RunLoad {
  readonly progress: Progress;
  readonly tail: TailRow | null;
  readonly chunks: readonly ChunkRow[];
  readonly pyramid: readonly PyramidRow[];
  /** Tail rows below this batch are replaced by the chunks; null without one. */
  readonly replacedBelow: number | null;
  /** Every batch below is durable once this load is. */
  readonly next: number;
}

/** Below this a chunk's own head would outweigh its samples: slow devices fill a chunk in more than its nominal time. */
const FEWEST_IN_CHUNK = 200;

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
  /** Samples that came. */
  samples: number;
  marks: RecordingRow['marks'];
  gaps: RecordingRow['gaps'];
  flagger: Flagger | null = null;
  /** Flags that ended so far, and how many open ones the rooms were told last. */
  ended: LiveFlag[] = [];
  openTold = 0;
  /** When the run ends: closed as soon as everything before is durable. */
  ending: 'done' | 'stopped' | 'fault' | 'lost' | null = null;
  /** Server's monotonic ms when something of this run came last. */
  heardAtMs = performance.now();
  /** The connection that streams it; null while its device is away, or back without going on with it. */
  by: object | null = null;
  /** Best knowledge of when it started; null until the clock was compared. */
  wall: WallTime | null = null;
  freshBytes = 0;

  private readonly sealer: Sealer;
  private gapsChanged = false;
  private marksChanged = false;
  private fresh: ReceivedBatch[] = [];
  private open: ReceivedBatch[] = [];
  /** Samples in sealed chunks. */
  private sealed = 0;
  private moving: { open: ReceivedBatch[]; load: RunLoad } | null = null;
  /** Flagged for a chunk however few samples there are: the run has ended. */
  private finished: Finished | null = null;

  constructor(row: RunRow, private readonly options: LinkOptions) {
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
  restoreChunk(chunk: Chunk): void {
    this.sealer.replay(chunk);
    this.sealed += chunk.count;
  }

  restoreTail(batches: readonly ReceivedBatch[]): void {
    this.open.push(...batches);
  }

  /** @returns the samples of the batch as they will be stored, or what is wrong with it */
  take(batch: Parameters<typeof takeBatch>[0]): Chunk | Exclude<ReturnType<typeof takeBatch>, ReceivedBatch> {
    const taken = takeBatch(batch, { rateHz: this.rateHz, channels: this.channels.length, startUs: this.startUs, nextSample: this.nextSample, lastUs: this.lastUs }, this.options);
    if ('code' in taken) return taken;
    this.noteGaps(taken);
    this.fresh.push(taken);
    this.freshBytes += taken.values.byteLength + taken.timesUs.byteLength;
    this.nextBatch = taken.n + 1;
    this.nextSample = taken.first + taken.count;
    this.lastUs = taken.timesUs[taken.count - 1] ?? this.lastUs;
    this.heardAtMs = performance.now();
    const chunk = asChunk(taken, this.samples);
    this.samples += taken.count;
    return chunk;
  }

  private noteGaps(taken: ReceivedBatch): void {
    const found = listGaps(taken, { lastUs: this.lastUs, nextSample: this.nextSample, rateHz: this.rateHz });
    const room = this.options.gapsListed - this.gaps.length;
    if (found.length === 0 || room <= 0) return;
    this.gaps = [...this.gaps, ...found.slice(0, room)];
    this.gapsChanged = true;
  }

  /** A mark that was sent twice is one mark. @returns whether it is new */
  mark(atS: number, label: string): boolean {
    if (this.marks.length >= this.options.marksKept || this.marks.some((each) => each.atS === atS && each.label === label)) return false;
    this.marks = [...this.marks, { atS, label }];
    this.marksChanged = true;
    return true;
  }

  get hasWork(): boolean {
    return this.moving !== null || this.fresh.length > 0 || this.marksChanged || (this.ending !== null && this.open.length > 0);
  }

  /** What the next commit should make durable; the same again until `committed`. Null when there is nothing. */
  load(): RunLoad | null {
    if (this.moving) return this.moving.load;
    if (!this.hasWork) return null;
    const { fresh } = this;
    this.fresh = [];
    this.freshBytes = 0;
    const next = (fresh.at(-1)?.n ?? this.durable - 1) + 1;
    const last = fresh.at(-1);
    const first = fresh[0];
    const stretches = this.stretchesDue([...this.open, ...fresh]);
    const sealed = stretches.map((batches) => {
      const chunk = joinBatches(batches, this.channels.length, this.sealed);
      this.sealed += chunk.count;
      return this.sealer.seal(chunk);
    });
    const open = sealed.length > 0 ? [] : [...this.open, ...fresh];
    const load: RunLoad = {
      progress: {
        id: this.id, nextBatch: next,
        samples: this.sealed + open.reduce((sum, batch) => sum + batch.count, 0),
        nextSample: last ? last.first + last.count : this.nextSample,
        lastUs: last ? (last.timesUs[last.count - 1] ?? 0) : Math.max(0, this.lastUs),
        gaps: this.gapsChanged ? this.gaps : null,
        marks: this.marksChanged ? this.marks : null,
      },
      tail: sealed.length > 0 || !first ? null : { recordingId: this.id, batch: first.n, batches: fresh.length, data: packTail(fresh) },
      chunks: sealed.map(({ chunk }) => chunk),
      pyramid: sealed.flatMap(({ pyramid }) => pyramid),
      replacedBelow: sealed.length > 0 ? next : null,
      next,
    };
    this.gapsChanged = false;
    this.marksChanged = false;
    this.moving = { open, load };
    return load;
  }

  /** Batches to be sealed now, one list a chunk; none while there is less than a chunk of a run that goes on. */
  private stretchesDue(batches: readonly ReceivedBatch[]): ReceivedBatch[][] {
    const full = Math.max(FEWEST_IN_CHUNK, this.options.chunkS * this.rateHz);
    const count = batches.reduce((sum, batch) => sum + batch.count, 0);
    if (count === 0 || (count < full && this.ending === null)) return [];
    const stretches: ReceivedBatch[][] = [[]];
    let inLast = 0;
    let left = count;
    for (const batch of batches) {
      // After a storm or a long outage there is much: chunks of the usual length, the rest with the last.
      if (inLast >= full && left >= full / 2) {
        stretches.push([]);
        inLast = 0;
      }
      stretches.at(-1)?.push(batch);
      inLast += batch.count;
      left -= batch.count;
    }
    return stretches;
  }

  committed(): void {
    if (!this.moving) return;
    this.open = this.moving.open;
    this.durable = this.moving.load.next;
    this.moving = null;
  }

  /** What closing writes: made once, because a close that failed is tried again with the same values. */
  finish(): Finished {
    this.finished ??= this.sealer.finish();
    return this.finished;
  }
}

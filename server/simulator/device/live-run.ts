/** A run that happens now: its batches fall due by the device's own clock and go into the outbox. */
import { float32Block, type DeviceOutbox, type End } from '@shared/link';
import type { ChannelName, Chunk } from '@shared/recording';
import type { Mark } from '../simulate-run';
import type { DeviceClock } from './device-clock';

/** What a device streams: chunks become batches as they are, so each has at most a batch's samples. */
export interface RunSource extends Iterable<Chunk> {
  readonly channels: readonly ChannelName[];
  readonly rateHz: number;
  /** Marks whose time has come, growing while the chunks are read. */
  readonly marks?: readonly Mark[];
}

export interface LiveRun {
  readonly run: string;
  readonly trial: string | null;
  mark(label: string): void;
  stop(reason: End['reason']): void;
  /** No more batches, without an end: as when the device's program dies. */
  abandon(): void;
}

export type LiveRunOptions = {
  run: string;
  trial: string | null;
  source: RunSource;
  clock: DeviceClock;
  outbox: DeviceOutbox;
  /** Times real time. */
  speed: number;
  onBatch(chunk: Chunk): void;
  onEnded(reason: End['reason']): void;
};

/** Longest sleep between looks at the clock, ms: a stop is noticed that soon. */
const NAP_MS = 20;
/** Batches made in one go when the device is behind; then others get their turn. */
const AT_ONCE = 50;

export function startLiveRun(options: LiveRunOptions): LiveRun {
  const { run, trial, source, clock, outbox, speed } = options;
  const chunks = source[Symbol.iterator]();
  const startUs = Math.round(clock.nowUs());
  const periodUs = 1e6 / source.rateHz;
  let marked = 0;
  let over = false;
  let timer: NodeJS.Timeout | undefined;
  outbox.begin(run, trial, startUs);

  const sinceUs = () => (clock.nowUs() - startUs) * speed;
  const end = (reason: End['reason']): void => {
    if (over) return;
    over = true;
    clearTimeout(timer);
    outbox.end(run, reason);
    options.onEnded(reason);
  };
  const markUntil = (untilUs: number): void => {
    for (const { atS, label } of source.marks?.slice(marked) ?? []) {
      if (atS * 1e6 > untilUs) return;
      marked += 1;
      outbox.mark(run, startUs + Math.round(atS * 1e6), label);
    }
  };

  let next = chunks.next();
  const work = (): void => {
    for (let made = 0; made < AT_ONCE && !over; made += 1) {
      if (next.done === true) return end('done');
      const chunk = next.value;
      const lastUs = chunk.timesUs[chunk.count - 1] as number;
      const dueInMs = (lastUs + periodUs - sinceUs()) / speed / 1000;
      if (dueInMs > 0) {
        timer = setTimeout(work, Math.min(NAP_MS, dueInMs));
        return;
      }
      outbox.add(run, batchOf(chunk, startUs, periodUs));
      markUntil(lastUs);
      options.onBatch(chunk);
      next = chunks.next();
    }
    if (!over) timer = setTimeout(work, 0);
  };
  timer = setTimeout(work, 0);

  return {
    run, trial,
    mark(label) {
      if (!over) outbox.mark(run, Math.round(clock.nowUs()), label);
    },
    stop: end,
    abandon() {
      over = true;
      clearTimeout(timer);
    },
  };
}

/** Samples that were lost show as an index ahead: indices count periods of the device's clock. */
function batchOf(chunk: Chunk, startUs: number, periodUs: number): Parameters<DeviceOutbox['add']>[1] {
  const values = new Float32Array(chunk.count * chunk.columns.length);
  chunk.columns.forEach((column, i) => values.set(column, i * chunk.count));
  const fromUs = chunk.timesUs[0] as number;
  return { first: Math.round(fromUs / periodUs), count: chunk.count, t0Us: startUs + fromUs, data: float32Block(values) as Uint8Array<ArrayBuffer> };
}

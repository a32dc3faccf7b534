/**
 * The device's side of the link as bookkeeping: what to keep, what to send next, what may be forgotten.
 *
 * It opens no socket and reads no clock. A device makes runs, batches and marks whenever it likes, connected or not; while
 * it is connected it asks `next()` until that says null, and tells what the server answers. What is not acknowledged is
 * kept and sent again after a break.
 */
import type { Begin, Batch, DeviceMessage, End, Mark, ServerMessage } from './messages';

export interface OutboxRun {
  readonly run: string;
  readonly trial: string | null;
  /** begun: the server knows it; refused: begin was not accepted; finished: closed by the server. */
  readonly state: 'waiting' | 'begun' | 'refused' | 'finished';
  /** Every batch below is durable. */
  readonly acknowledged: number;
  readonly made: number;
  readonly kept: number;
}

export interface DeviceOutbox {
  begin(run: string, trial: string | null, startUs: number): void;
  /** Numbers the batch and keeps it. */
  add(run: string, batch: Omit<Batch, 'type' | 'run' | 'n'>): void;
  mark(run: string, atUs: number, label: string): void;
  end(run: string, reason: End['reason']): void;
  /** The next message to send now; null when there is nothing or too much is unacknowledged. */
  next(): DeviceMessage | null;
  /** What came from the server; clock, arm, disarm and stop are the device's own business. */
  take(message: ServerMessage): void;
  /** The link broke: everything that is not acknowledged will be sent again. */
  broken(): void;
  runs(): readonly OutboxRun[];
  /** Nothing is kept any more and every run is closed or refused. */
  empty(): boolean;
}

interface Kept {
  begin: Begin;
  state: OutboxRun['state'];
  beginSent: boolean;
  /** Batches from number `base` on. */
  batches: Batch[];
  base: number;
  /** Number of the next batch to send. */
  cursor: number;
  marks: { mark: Mark; sent: boolean }[];
  samples: number;
  end: End | null;
  endSent: boolean;
}

/** @param unacked most batches of a run in flight until the server says its own limit */
export function createDeviceOutbox(unacked = 64): DeviceOutbox {
  const kept = new Map<string, Kept>();
  let connected = false;
  let limit = unacked;

  const get = (run: string): Kept => {
    const found = kept.get(run);
    if (found === undefined) throw new Error(`Run ${run} was not begun.`);
    return found;
  };
  const forget = (entry: Kept, upTo: number): void => {
    const count = Math.min(Math.max(upTo - entry.base, 0), entry.batches.length);
    entry.batches.splice(0, count);
    entry.base += count;
    entry.cursor = Math.max(entry.cursor, entry.base);
  };
  const finish = (entry: Kept, state: 'finished' | 'refused'): void => {
    entry.state = state;
    entry.base += entry.batches.length;
    entry.batches = [];
    entry.marks = [];
  };

  const nextOf = (entry: Kept): DeviceMessage | null => {
    if (entry.state === 'finished' || entry.state === 'refused') return null;
    if (entry.state === 'waiting') {
      if (entry.beginSent) return null;
      entry.beginSent = true;
      return entry.begin;
    }
    const waiting = entry.marks.find((one) => !one.sent);
    if (waiting !== undefined) {
      waiting.sent = true;
      return waiting.mark;
    }
    const batch = entry.batches[entry.cursor - entry.base];
    if (batch !== undefined) {
      if (entry.cursor - entry.base >= limit) return null;
      entry.cursor += 1;
      return batch;
    }
    if (entry.end !== null && !entry.endSent) {
      entry.endSent = true;
      return entry.end;
    }
    return null;
  };

  return {
    begin(run, trial, startUs) {
      if (kept.has(run)) throw new Error(`Run ${run} was begun before.`);
      kept.set(run, { begin: { type: 'begin', trial, run, startUs }, state: 'waiting', beginSent: false, batches: [], base: 0, cursor: 0, marks: [], samples: 0, end: null, endSent: false });
    },
    add(run, batch) {
      const entry = get(run);
      if (entry.end !== null) throw new Error(`Run ${run} has ended.`);
      if (entry.state === 'finished' || entry.state === 'refused') return;
      entry.batches.push({ type: 'batch', run, n: entry.base + entry.batches.length, ...batch });
      entry.samples += batch.count;
    },
    mark(run, atUs, label) {
      get(run).marks.push({ mark: { type: 'mark', run, atUs, label }, sent: false });
    },
    end(run, reason) {
      const entry = get(run);
      entry.end ??= { type: 'end', run, batches: entry.base + entry.batches.length, samples: entry.samples, reason };
    },
    next() {
      if (!connected) return null;
      for (const entry of kept.values()) {
        const message = nextOf(entry);
        if (message !== null) return message;
      }
      return null;
    },
    take(message) {
      switch (message.type) {
        case 'welcome':
          connected = true;
          limit = message.limits.unacked;
          for (const { run, next } of message.resume) {
            const entry = kept.get(run);
            if (entry === undefined || entry.state === 'refused') continue;
            entry.state = 'begun';
            forget(entry, next);
            entry.cursor = Math.max(next, entry.base);
          }
          break;
        case 'ack': {
          const entry = kept.get(message.run);
          if (entry === undefined) break;
          if (entry.state === 'waiting') entry.state = 'begun';
          forget(entry, message.next);
          if (message.ended === true) finish(entry, 'finished');
          break;
        }
        case 'pace':
          limit = Math.max(1, message.unacked);
          break;
        case 'fault': {
          const entry = message.run === undefined ? undefined : kept.get(message.run);
          if (entry === undefined) break;
          if (message.code === 'BATCH_ORDER' && message.n !== undefined) {
            entry.cursor = Math.max(message.n, entry.base);
            entry.endSent = false;
          } else if (message.code === 'RUN_UNKNOWN') {
            entry.state = 'waiting';
            entry.beginSent = false;
          } else if (message.code === 'RUN_CLOSED') finish(entry, 'finished');
          else if (message.code === 'TRIAL_UNKNOWN' || message.code === 'TRIAL_NOT_ARMED') finish(entry, 'refused');
          break;
        }
        default:
      }
    },
    broken() {
      connected = false;
      for (const entry of kept.values()) {
        // begin is sent again unless welcome lists the run: the server answers with what the run wants.
        if (entry.state === 'begun') entry.state = 'waiting';
        entry.beginSent = false;
        entry.cursor = entry.base;
        entry.endSent = false;
        for (const one of entry.marks) one.sent = false;
      }
    },
    runs: () => [...kept.values()].map((entry) => ({
      run: entry.begin.run, trial: entry.begin.trial, state: entry.state, acknowledged: entry.base, made: entry.base + entry.batches.length, kept: entry.batches.length,
    })),
    empty: () => [...kept.values()].every((entry) => entry.state === 'finished' || entry.state === 'refused'),
  };
}

/** What a device made and what the server said is durable of it, run by run, so that tests and people can compare. */
import type { End, OutboxRun, ServerMessage } from '@shared/link';
import type { Chunk } from '@shared/recording';

export type RunReport = {
  run: string;
  trial: string | null;
  /** closed: the server closed the recording. */
  state: 'waiting' | 'begun' | 'refused' | 'closed';
  reason: End['reason'] | null;
  batches: number;
  samples: number;
  acknowledgedBatches: number;
  acknowledgedSamples: number;
};

type Entry = { counts: number[]; chunks: Chunk[]; reason: End['reason'] | null; acknowledged: number };

export class RunLedger {
  readonly #entries = new Map<string, Entry>();

  constructor(private readonly keepSamples: boolean) {}

  begin(run: string): void {
    this.#entries.set(run, { counts: [], chunks: [], reason: null, acknowledged: 0 });
  }

  add(run: string, chunk: Chunk): void {
    const entry = this.#get(run);
    entry.counts.push(chunk.count);
    if (this.keepSamples) entry.chunks.push(chunk);
  }

  end(run: string, reason: End['reason']): void {
    this.#get(run).reason = reason;
  }

  /** Only what the server said counts, not what was forgotten because a run was closed or refused. */
  hear(message: ServerMessage): void {
    if (message.type === 'ack') this.#durable(message.run, message.next);
    if (message.type === 'welcome') for (const { run, next } of message.resume) this.#durable(run, next);
  }

  samplesOf(run: string): readonly Chunk[] {
    return this.#entries.get(run)?.chunks ?? [];
  }

  reportOf({ run, trial, state }: OutboxRun): RunReport {
    const { counts, reason, acknowledged } = this.#get(run);
    const sum = (part: number[]) => part.reduce((total, count) => total + count, 0);
    return {
      run, trial, reason, state: state === 'finished' ? 'closed' : state,
      batches: counts.length, samples: sum(counts), acknowledgedBatches: acknowledged, acknowledgedSamples: sum(counts.slice(0, acknowledged)),
    };
  }

  #durable(run: string, next: number): void {
    const entry = this.#entries.get(run);
    if (entry) entry.acknowledged = Math.max(entry.acknowledged, next);
  }

  #get(run: string): Entry {
    const entry = this.#entries.get(run);
    if (!entry) throw new Error(`Run ${run} is not in the ledger.`);
    return entry;
  }
}

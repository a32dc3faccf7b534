/** Is a batch what the run wants next, and are its counts, times and values true? No allocation but the samples themselves. */
import { type Batch, type FaultCode, float32sOf, type LinkOptions, uint32sOf } from '@shared/link';
import type { ReceivedBatch } from './received-batch';

export interface RunPlace {
  readonly rateHz: number;
  readonly channels: number;
  readonly startUs: number;
  /** Device's sample index that is expected next. */
  readonly nextSample: number;
  /** Time of the last sample, µs since the start; below 0 before the first. */
  readonly lastUs: number;
}

export type BatchFlaw = { readonly code: FaultCode; readonly message: string };
const MOST_SAMPLES = 2_147_483_647;

/** @returns the batch with its samples in aligned memory, or what is wrong with it */
export function takeBatch(batch: Batch, run: RunPlace, options: LinkOptions): ReceivedBatch | BatchFlaw {
  const { count } = batch;
  if (count < 1 || count > options.batchSamples) return flaw('BATCH_SIZE', `A batch holds 1 to ${options.batchSamples} samples, this one says ${count}.`);
  if (batch.data.length !== count * run.channels * 4) {
    return flaw('BATCH_SIZE', `${count} samples of ${run.channels} channels are ${count * run.channels * 4} bytes of float32, these are ${batch.data.length}.`);
  }
  if (batch.dtUs !== undefined && batch.dtUs.length !== count * 4) return flaw('BATCH_SIZE', `dtUs holds one uint32 a sample: ${count * 4} bytes, these are ${batch.dtUs.length}.`);
  if (batch.first < run.nextSample) return flaw('BATCH_SIZE', `first is ${batch.first}, but the samples before it reach ${run.nextSample}.`);
  if (batch.first + count > MOST_SAMPLES) return flaw('BATCH_SIZE', 'A run holds at most 2^31 samples.');
  const timesUs = timesOf(batch, run);
  if (timesUs === null) return flaw('RATE', 'Every sample needs a later time than the one before.');
  const values = float32sOf(batch.data);
  const bits = new Uint32Array(values.buffer);
  for (let i = 0; i < bits.length; i += 1) {
    if (((bits[i] as number) & 0x7fffffff) === 0x7f800000) return flaw('NOT_FINITE', `Value ${i % count} of channel ${Math.floor(i / count) + 1} is infinite.`);
  }
  return { n: batch.n, first: batch.first, count, timesUs, values };
}

const flaw = (code: FaultCode, message: string): BatchFlaw => ({ code, message });

function timesOf({ t0Us, dtUs, count }: Batch, { startUs, rateHz, lastUs }: RunPlace): Float64Array | null {
  const timesUs = new Float64Array(count);
  const t0 = t0Us - startUs;
  if (t0 < 0 || t0 <= lastUs) return null;
  if (dtUs === undefined) {
    const periodUs = 1e6 / rateHz;
    for (let i = 0; i < count; i += 1) timesUs[i] = t0 + i * periodUs;
    return timesUs;
  }
  const steps = uint32sOf(dtUs);
  for (let i = 0; i < count; i += 1) {
    const at = t0 + (steps[i] as number);
    if (i > 0 && at <= (timesUs[i - 1] as number)) return null;
    timesUs[i] = at;
  }
  return timesUs;
}

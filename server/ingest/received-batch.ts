/** A batch as the recorder keeps it, and how a few of them lie in one row of the tail until their chunk replaces them. */
import type { Chunk } from '@shared/recording';
import { float32Block, float32sOf, float64Block, float64sOf, pack, unpack } from '@shared/link';
import { z } from 'zod';

export interface ReceivedBatch {
  readonly n: number;
  /** The device's sample index, lost ones counted. */
  readonly first: number;
  readonly count: number;
  /** µs since the recording's start. */
  readonly timesUs: Float64Array;
  /** Channel after channel, `count` values each. */
  readonly values: Float32Array;
}

const stored = z.object({
  batches: z.array(z.object({ n: z.number(), first: z.number(), count: z.number(), times: z.instanceof(Uint8Array), values: z.instanceof(Uint8Array) })),
});

export const packTail = (batches: readonly ReceivedBatch[]): Uint8Array => pack({
  batches: batches.map(({ n, first, count, timesUs, values }) => ({ n, first, count, times: float64Block(timesUs), values: float32Block(values) })),
});

export const unpackTail = (bytes: Uint8Array): ReceivedBatch[] =>
  stored.parse(unpack(bytes)).batches.map(({ n, first, count, times, values }) => ({ n, first, count, timesUs: float64sOf(times), values: float32sOf(values) }));

/** Looks at a batch as a chunk, without copying. @param first index among the stored samples */
export function asChunk({ count, timesUs, values }: ReceivedBatch, first: number): Chunk {
  const channels = count === 0 ? 0 : values.length / count;
  return { first, count, timesUs, columns: Array.from({ length: channels }, (_, c) => values.subarray(c * count, (c + 1) * count)) };
}

/** One chunk of all batches, in order. */
export function joinBatches(batches: readonly ReceivedBatch[], channels: number, first: number): Chunk {
  const count = batches.reduce((sum, batch) => sum + batch.count, 0);
  const timesUs = new Float64Array(count);
  // Copied as bit patterns: a NaN read as a number may lose its payload.
  const columns = Array.from({ length: channels }, () => new Uint32Array(count));
  let at = 0;
  for (const batch of batches) {
    timesUs.set(batch.timesUs, at);
    const bits = new Uint32Array(batch.values.buffer, batch.values.byteOffset, batch.values.length);
    columns.forEach((column, c) => column.set(bits.subarray(c * batch.count, (c + 1) * batch.count), at));
    at += batch.count;
  }
  return { first, count, timesUs, columns: columns.map((column) => new Float32Array(column.buffer)) };
}

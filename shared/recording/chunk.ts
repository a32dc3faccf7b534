/**
 * A chunk: a stretch of a recording, column by column, usually one second.
 *
 * Times are µs since the recording's start on the device's own clock; a value that was not measured is NaN.
 * Values are float32 and keep their bits on every way through the product, NaN payloads and negative zero included.
 */
export type Chunk = {
  /** Index of the first sample in the recording; samples that were lost keep no index. */
  first: number;
  count: number;
  /** Length `count`, strictly rising. */
  timesUs: Float64Array;
  /** One column a channel, each of length `count`. */
  columns: Float32Array[];
};

export { encodeChunk, decodeChunk, peekChunk } from './chunk-codec';
export type { ChunkHead } from './chunk-codec';
export { ChunkError } from './chunk-error';
export type { ChunkErrorCode } from './chunk-error';
export { fflateDeflate, fflateInflate } from './deflate';
export type { Deflate, Inflate } from './deflate';

/**
 * What is kept of a recording when it closes: a digest that anyone can compute again, its gaps, and statistics.
 *
 * The digest is SHA-256 (FIPS 180-4) over the following bytes, which do not depend on how the samples were cut into chunks:
 * the ASCII text `tautbook.samples/1`, a line feed, the channel names joined by commas, a line feed, and then for each
 * sample in order its time as little-endian float64 in µs since the recording's start and its channels as
 * little-endian float32, bit patterns as they arrived.
 */
import type { ChannelName } from './channels';
import type { Chunk } from './chunk';

/** The hash function, passed in because platforms have different ones. */
export type HashUpdate = { update(bytes: Uint8Array): unknown };

export type SampleHasher = { push(chunk: Chunk): void };

const littleEndian = new Uint8Array(Uint32Array.of(1).buffer)[0] === 1;

/** Feeds the header at once and then every chunk to `hash`; the caller reads the hash out. */
export function sampleHasher(channels: readonly ChannelName[], hash: HashUpdate): SampleHasher {
  hash.update(new TextEncoder().encode(`tautbook.samples/1\n${channels.join(',')}\n`));
  const words = 2 + channels.length;
  let buffer = new Uint32Array(0);
  return {
    push({ count, timesUs, columns }) {
      if (buffer.length < count * words) buffer = new Uint32Array(count * words);
      // Copied as bit patterns: a NaN read as a number may lose its payload.
      copyStrided(new Uint32Array(timesUs.buffer, timesUs.byteOffset, 2 * count), 2, buffer, words, 0, count);
      columns.forEach((column, c) => copyStrided(new Uint32Array(column.buffer, column.byteOffset, count), 1, buffer, words, 2 + c, count));
      if (!littleEndian) swapBytes(buffer, count, words);
      hash.update(new Uint8Array(buffer.buffer, 0, count * words * 4));
    },
  };
}

function copyStrided(source: Uint32Array, width: number, target: Uint32Array, stride: number, at: number, count: number): void {
  for (let i = 0; i < count; i += 1) for (let w = 0; w < width; w += 1) target[i * stride + at + w] = source[i * width + w] as number;
}

/** On a big-endian machine the halves of a time stand the other way round, and every word too. */
function swapBytes(buffer: Uint32Array, count: number, words: number): void {
  for (let i = 0; i < count; i += 1) {
    const low = buffer[i * words + 1] as number;
    buffer[i * words + 1] = buffer[i * words] as number;
    buffer[i * words] = low;
  }
  for (let i = 0; i < count * words; i += 1) {
    const w = buffer[i] as number;
    buffer[i] = ((w & 0xff) << 24) | ((w & 0xff00) << 8) | ((w >>> 8) & 0xff00) | (w >>> 24);
  }
}

/**
 * A stretch of one level of the pyramid, in memory and in bytes.
 *
 * The bytes are two chunks (`encodeChunk`) behind a short header, because minima and maxima lie on the sensor's grid
 * just as the samples do: u32 'TBpy', u8 version, u8 level, u16 channels, u32 length of the first chunk, then a chunk
 * with the starts as times and the columns sample count, then minimum, maximum, mean, measured for each channel, then
 * a chunk with the ends as times and no columns.
 */
import { ByteReader, ByteWriter } from './bytes';
import { decodeChunk, encodeChunk } from './chunk-codec';
import { ChunkError } from './chunk-error';
import type { Deflate, Inflate } from './deflate';

export type PyramidBlock = {
  /** 1 is the finest. */
  level: number;
  /** Index of the first bucket in its level. */
  first: number;
  /** Buckets in the block. */
  count: number;
  /** First and last sample of each bucket, µs since the recording's start. */
  startsUs: Float64Array;
  endsUs: Float64Array;
  /** Samples of each bucket; only the recording's last bucket of a level has fewer than `bucketSamples(level)`. */
  samples: Float32Array;
  /** One column a channel; NaN where nothing was measured in the bucket. */
  minima: Float32Array[];
  maxima: Float32Array[];
  means: Float32Array[];
  /** How many samples of the bucket were measured. */
  measured: Float32Array[];
};

const magic = 0x79704254; // 'TBpy' read as a little-endian u32
const version = 1;
const headSize = 12;

export function encodePyramidBlock(block: PyramidBlock, deflate?: Deflate): Uint8Array {
  const { first, count, minima, maxima, means, measured } = block;
  const columns = [block.samples, ...minima.flatMap((minimum, c) => [minimum, maxima[c], means[c], measured[c]] as Float32Array[])];
  const body = encodeChunk({ first, count, timesUs: block.startsUs, columns }, deflate);
  const ends = encodeChunk({ first, count, timesUs: block.endsUs, columns: [] }, deflate);
  const out = new ByteWriter(headSize + body.length + ends.length);
  out.u32(magic);
  out.u8(version);
  out.u8(block.level);
  out.u16(minima.length);
  out.u32(body.length);
  out.bytes(body);
  out.bytes(ends);
  return out.take();
}

/** @throws ChunkError, as `decodeChunk` does; a block that throws is made again from the chunks */
export function decodePyramidBlock(bytes: Uint8Array, inflate?: Inflate): PyramidBlock {
  if (bytes.length < headSize) throw new ChunkError('CHUNK_SHORT', `A pyramid block has at least ${headSize} bytes; ${bytes.length} came.`);
  const head = new ByteReader(bytes, 0);
  if (head.u32() !== magic) throw new ChunkError('CHUNK_MAGIC', 'These bytes are not a block of a pyramid.');
  const found = head.u8();
  if (found !== version) throw new ChunkError('CHUNK_VERSION', `This pyramid block has version ${found}; this program reads version ${version}.`);
  const level = head.u8();
  const channels = head.u16();
  const bodyLength = head.u32();
  if (bodyLength > head.left()) throw new ChunkError('CHUNK_SHORT', 'The pyramid block ends before its content does.');
  const body = decodeChunk(head.bytes(bodyLength), inflate);
  const ends = decodeChunk(head.bytes(head.left()), inflate);
  if (body.columns.length !== 1 + 4 * channels || ends.count !== body.count || ends.first !== body.first) {
    throw new ChunkError('CHUNK_CONTENT', 'The two halves of a pyramid block do not belong together.');
  }
  const every = (which: number) => Array.from({ length: channels }, (_, c) => body.columns[1 + 4 * c + which] as Float32Array);
  return {
    level,
    first: body.first,
    count: body.count,
    startsUs: body.timesUs,
    endsUs: ends.timesUs,
    samples: body.columns[0] as Float32Array,
    minima: every(0),
    maxima: every(1),
    means: every(2),
    measured: every(3),
  };
}

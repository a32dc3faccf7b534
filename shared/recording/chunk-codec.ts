/**
 * Chunk bytes, version 1: lossless, checked, decodable in browser and server alike.
 *
 * Every column of float32 becomes integers in the way that is cheaper for it: exact counts on the sensor's decimal
 * grid where the values lie on one (13.5387 N is 135387 at four decimals), else the bit patterns in numeric order.
 * Those integers are differenced (order 0, 1 or 2) and zigzagged. Noise becomes Rice codes; where most differences are zero,
 * they are split into byte planes, and each plane is left out (all zero), stored, entropy-coded (Huffman-only DEFLATE)
 * or searched for repeats (DEFLATE). The choices stand in the chunk. Layout, little-endian:
 *
 *   0  'TBch'            4  version u8, 0 u8, columns u16
 *   8  count u32        12  first f64
 *  20  CRC-32 u32 of all bytes from 24
 *  24  the head's length u32, the head (times, then a description of each column), then the streams:
 *      stored (length u32, bytes), huffman and match (raw length u32, packed length u32, bytes)
 */
import type { Chunk } from './chunk';
import { ChunkError } from './chunk-error';
import { countColumn, decodeColumn, describeColumn, readColumn, writePlanes, type PackedColumn } from './column-codec';
import { crc32 } from './crc32';
import { ByteReader, ByteWriter } from './bytes';
import { fflateDeflate, fflateInflate, type Deflate, type Inflate } from './deflate';
import { writeIntegerPlane } from './integer-codec';
import { packTimes, readTimes, type PackedTimes } from './time-codec';
import { StreamReaders, StreamWriters } from './streams';

const magic = 0x68634254; // 'TBch' read as a little-endian u32
const version = 1;
const headAt = 24;
const maxColumns = 1024;
/** One chunk never decodes to more than this many values, so that a forged header cannot ask for all memory. */
const maxValues = 1 << 26;

export type ChunkHead = { readonly first: number; readonly count: number; readonly columns: number };

/**
 * @param chunk    count >= 1, columns of equal length
 * @param deflate  fflate when left out; a server passes its native one
 * @throws ChunkError CHUNK_SHAPE
 */
export function encodeChunk(chunk: Chunk, deflate: Deflate = fflateDeflate): Uint8Array {
  const { first, count, timesUs, columns } = chunk;
  requireShape(chunk);
  const head = new ByteWriter(64 + columns.length * 24);
  const streams = new StreamWriters(count * (columns.length * 3 + 8) + 1024);
  const times: PackedTimes = packTimes(timesUs, count);
  const packed: PackedColumn[] = columns.map((column) => countColumn(column, count));
  times.describe(head, streams);
  for (const column of packed) describeColumn(column, head, streams);
  // Plane by plane across all columns: neighbours in a stream then share their statistics, which is what the small Huffman blocks live on.
  for (let plane = 0; plane < 4; plane += 1) {
    if (times.column) writeIntegerPlane(times.column, plane, streams);
    for (const column of packed) writePlanes(column, plane, streams);
  }
  const out = new ByteWriter(headAt + 8 + head.length + streams.rawLength + 64);
  out.u32(magic);
  out.u8(version);
  out.u8(0);
  out.u16(columns.length);
  out.u32(count);
  out.f64(first);
  out.u32(0);
  out.u32(head.length);
  out.bytes(head.view());
  streams.finish(out, deflate);
  out.patchU32(20, crc32(out.view(), headAt));
  return out.take();
}

/**
 * @param bytes    one chunk, nothing behind it
 * @param inflate  fflate when left out
 * @throws ChunkError with the reason; never returns values that differ from those encoded
 */
export function decodeChunk(bytes: Uint8Array, inflate: Inflate = fflateInflate): Chunk {
  const { first, count, columns: columnCount } = peekChunk(bytes);
  if (crc32(bytes, headAt) !== new ByteReader(bytes, 20).u32()) {
    throw new ChunkError('CHUNK_CHECKSUM', 'The chunk changed since it was written: its checksum does not hold. Restore it from a backup.');
  }
  try {
    const reader = new ByteReader(bytes, headAt);
    const headLength = reader.u32();
    const head = new ByteReader(reader.bytes(headLength), 0);
    const streams = new StreamReaders(reader, inflate, count * (columnCount * 8 + 16) + 1024);
    const times = readTimes(head, streams, count);
    const described = Array.from({ length: columnCount }, () => readColumn(head, streams, count));
    for (let plane = 0; plane < 4; plane += 1) {
      times.column?.readPlane(plane, streams);
      for (const column of described) column.readPlane(plane, streams);
    }
    const columns = described.map((column) => decodeColumn(column, count));
    return { first, count, timesUs: times.decode(), columns };
  } catch (cause) {
    if (cause instanceof ChunkError) throw cause;
    throw new ChunkError('CHUNK_CONTENT', `The chunk's content contradicts itself: ${cause instanceof Error ? cause.message : 'unreadable'}.`);
  }
}

/**
 * First index, sample count and channel count of a chunk, without decoding it.
 * @throws ChunkError CHUNK_SHORT, CHUNK_MAGIC, CHUNK_VERSION, CHUNK_CONTENT
 */
export function peekChunk(bytes: Uint8Array): ChunkHead {
  if (bytes.length < headAt + 4) throw new ChunkError('CHUNK_SHORT', `A chunk has at least ${headAt + 4} bytes; ${bytes.length} came.`);
  const reader = new ByteReader(bytes, 0);
  if (reader.u32() !== magic) throw new ChunkError('CHUNK_MAGIC', 'These bytes are not a chunk of a recording.');
  const found = reader.u8();
  if (found !== version) throw new ChunkError('CHUNK_VERSION', `This chunk has version ${found}; this program reads version ${version}. Use the newer program.`);
  reader.u8();
  const columns = reader.u16();
  const count = reader.u32();
  const first = reader.f64();
  if (count < 1 || columns > maxColumns || count * Math.max(1, columns) > maxValues || !Number.isInteger(first) || first < 0) {
    throw new ChunkError('CHUNK_CONTENT', `The chunk's header asks for ${count} samples of ${columns} channels from index ${first}, which no recorder writes.`);
  }
  return { first, count, columns };
}

function requireShape({ first, count, timesUs, columns }: Chunk): void {
  const wrong =
    !Number.isInteger(count) || count < 1 ? `a chunk of ${count} samples`
    : columns.length > maxColumns ? `${columns.length} columns, at most ${maxColumns}`
    : count * Math.max(1, columns.length) > maxValues ? `${count} samples of ${columns.length} columns in one chunk`
    : !Number.isInteger(first) || first < 0 ? `a first index of ${first}`
    : timesUs.length !== count ? `${timesUs.length} times for ${count} samples`
    : columns.some((column) => column.length !== count) ? 'columns of unequal length'
    : null;
  if (wrong !== null) throw new ChunkError('CHUNK_SHAPE', `This cannot be stored as a chunk: ${wrong}.`);
}

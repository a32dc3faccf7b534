/**
 * One column of float32 as integers: constant, on the sensor's decimal grid, or bit patterns in numeric order.
 * Works on the bits throughout: reading a NaN as a number could change its payload.
 */
import type { ByteReader, ByteWriter } from './bytes';
import { powersOfTen } from './csv-number';
import { findGrid } from './decimal-grid';
import { countIntegers, describeIntegers, readIntegers, writeIntegerPlane, type IntegerReader, type PackedIntegers } from './integer-codec';
import { planeWay, type StreamReaders, type StreamWriters } from './streams';

const columnKind = { constant: 0, grid: 1, bits: 2 } as const;
/** Values off the grid (not measured, negative zero): none, all with one bit pattern, or each with its own. */
const strayKind = { none: 0, same: 1, own: 2 } as const;

export type PackedColumn =
  | { readonly kind: 'constant'; readonly bits: number }
  | { readonly kind: 'bits'; readonly integers: PackedIntegers }
  | { readonly kind: 'grid'; readonly decimals: number; readonly integers: PackedIntegers; readonly strays: Strays | null };

type Strays = { readonly mask: Uint8Array; readonly patterns: Uint32Array; readonly same: boolean };

export function countColumn(column: Float32Array, count: number): PackedColumn {
  const bits = new Uint32Array(column.buffer, column.byteOffset, count);
  const firstBits = bits[0] as number;
  let i = 1;
  while (i < count && bits[i] === firstBits) i += 1;
  if (i === count) return { kind: 'constant', bits: firstBits };
  const grid = findGrid(column, bits, count);
  if (!grid) return { kind: 'bits', integers: countIntegers(orderedBits(bits, count), count) };
  const integers = countIntegers(grid.integers, count);
  const strays = grid.strays > 0 ? collectStrays(bits, grid.isStray, count, grid.strays) : null;
  return { kind: 'grid', decimals: grid.decimals, integers, strays };
}

export function describeColumn(column: PackedColumn, head: ByteWriter, streams: StreamWriters): void {
  if (column.kind === 'constant') {
    head.u8(columnKind.constant);
    head.u32(column.bits);
    return;
  }
  head.u8(columnKind[column.kind]);
  if (column.kind === 'grid') {
    head.u8(column.decimals);
    describeStrays(column.strays, head, streams);
  }
  describeIntegers(column.integers, head, streams);
}

export function writePlanes(column: PackedColumn, plane: number, streams: StreamWriters): void {
  if (column.kind !== 'constant') writeIntegerPlane(column.integers, plane, streams);
}

export type ColumnReader = { readPlane(plane: number, streams: StreamReaders): void; toColumn(count: number): Float32Array };

export function readColumn(head: ByteReader, streams: StreamReaders, count: number): ColumnReader {
  const kind = head.u8();
  if (kind === columnKind.constant) {
    const bits = head.u32();
    return { readPlane: () => undefined, toColumn: (n) => new Float32Array(new Uint32Array(n).fill(bits).buffer) };
  }
  if (kind === columnKind.bits) {
    const integers = readIntegers(head, streams, count);
    return { readPlane: integers.readPlane, toColumn: (n) => fromOrderedBits(integers.decode(), n) };
  }
  if (kind !== columnKind.grid) throw new RangeError(`a column of kind ${kind}`);
  const scale = powersOfTen[head.u8()];
  if (scale === undefined) throw new RangeError('a grid finer than any');
  const strays = readStrays(head, streams, count);
  const integers: IntegerReader = readIntegers(head, streams, count);
  return {
    readPlane: integers.readPlane,
    toColumn: (n) => {
      const column = integers.decodeOver(scale);
      if (strays) putStrays(column, strays, n);
      return column;
    },
  };
}

export function decodeColumn(column: ColumnReader, count: number): Float32Array {
  return column.toColumn(count);
}

/** Bit patterns as int32 that rise with the value (-Infinity lowest); its own inverse in `fromOrderedBits`. */
function orderedBits(bits: Uint32Array, count: number): Int32Array {
  const out = new Int32Array(count);
  for (let i = 0; i < count; i += 1) {
    const b = (bits[i] as number) | 0;
    out[i] = b ^ ((b >> 31) & 0x7fffffff);
  }
  return out;
}

function fromOrderedBits(ordered: Int32Array, count: number): Float32Array {
  const column = new Float32Array(count);
  const bits = new Int32Array(column.buffer);
  for (let i = 0; i < count; i += 1) {
    const b = ordered[i] as number;
    bits[i] = b ^ ((b >> 31) & 0x7fffffff);
  }
  return column;
}

function collectStrays(bits: Uint32Array, isStray: Uint8Array, count: number, strays: number): Strays {
  const mask = new Uint8Array((count + 7) >>> 3);
  const patterns = new Uint32Array(strays);
  let n = 0;
  let same = true;
  for (let i = 0; i < count; i += 1) {
    if (!isStray[i]) continue;
    mask[i >>> 3] = (mask[i >>> 3] as number) | (1 << (i & 7));
    patterns[n] = bits[i] as number;
    same &&= patterns[n] === patterns[0];
    n += 1;
  }
  return { mask, patterns, same };
}

function describeStrays(strays: Strays | null, head: ByteWriter, streams: StreamWriters): void {
  if (!strays) {
    head.u8(strayKind.none);
    return;
  }
  const match = streams.of(planeWay.match);
  head.u8(strays.same ? strayKind.same : strayKind.own);
  match.bytes(strays.mask);
  if (strays.same) head.u32(strays.patterns[0] as number);
  else {
    head.u32(strays.patterns.length);
    strays.patterns.forEach((pattern) => match.u32(pattern));
  }
}

function readStrays(head: ByteReader, streams: StreamReaders, count: number): Strays | null {
  const kind = head.u8();
  if (kind === strayKind.none) return null;
  if (kind > strayKind.own) throw new RangeError(`strays of kind ${kind}`);
  const mask = streams.take(planeWay.match, (count + 7) >>> 3);
  if (kind === strayKind.same) return { mask, patterns: Uint32Array.of(head.u32()), same: true };
  const n = head.u32();
  if (n > count) throw new RangeError(`${n} strays among ${count} values`);
  const bytes = streams.take(planeWay.match, n * 4);
  const data = new DataView(bytes.buffer, bytes.byteOffset, bytes.byteLength);
  return { mask, patterns: Uint32Array.from({ length: n }, (_, i) => data.getUint32(i * 4, true)), same: false };
}

function putStrays(column: Float32Array, { mask, patterns, same }: Strays, count: number): void {
  const bits = new Uint32Array(column.buffer, column.byteOffset, count);
  let n = 0;
  for (let i = 0; i < count; i += 1) {
    if (!((mask[i >>> 3] as number) & (1 << (i & 7)))) continue;
    const pattern = patterns[same ? 0 : n];
    if (pattern === undefined) throw new RangeError('fewer strays than their mask names');
    bits[i] = pattern;
    n += 1;
  }
}

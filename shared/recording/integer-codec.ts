/** A column of int32 as differences of the cheapest order, zigzagged, in byte planes. All arithmetic wraps at 2^32, so every input is reversible. */
import type { ByteReader, ByteWriter } from './bytes';
import { planeWay, type PlaneWay, type StreamReaders, type StreamWriters } from './streams';

export type DifferenceOrder = 0 | 1 | 2;

export type PackedIntegers = {
  readonly order: DifferenceOrder;
  /** First value, and for order 2 the first difference. */
  readonly base: number;
  readonly slope: number;
  readonly ways: readonly [PlaneWay, PlaneWay, PlaneWay, PlaneWay];
  /** Zigzagged differences, `count` of them. */
  readonly zigzag: Int32Array;
};

export type IntegerReader = { readPlane(plane: number, streams: StreamReaders): void; decode(): Int32Array };

export function countIntegers(values: Int32Array, count: number): PackedIntegers {
  const order = cheapestOrder(values, count);
  const base = values[0] as number;
  const slope = order === 2 && count > 1 ? ((values[1] as number) - base) | 0 : 0;
  const zigzag = new Int32Array(count);
  let all = 0;
  if (order === 0) {
    for (let i = 1; i < count; i += 1) {
      const d = ((values[i] as number) - base) | 0;
      const z = (d << 1) ^ (d >> 31);
      zigzag[i] = z;
      all |= z;
    }
  } else if (order === 1) {
    let before = base;
    for (let i = 1; i < count; i += 1) {
      const v = values[i] as number;
      const d = (v - before) | 0;
      before = v;
      const z = (d << 1) ^ (d >> 31);
      zigzag[i] = z;
      all |= z;
    }
  } else {
    let before = count > 1 ? (values[1] as number) : base;
    let step = slope;
    for (let i = 2; i < count; i += 1) {
      const v = values[i] as number;
      const s = (v - before) | 0;
      const d = (s - step) | 0;
      before = v;
      step = s;
      const z = (d << 1) ^ (d >> 31);
      zigzag[i] = z;
      all |= z;
    }
  }
  const ways = [0, 1, 2, 3].map((plane) => chooseWay(zigzag, count, plane, all));
  return { order, base, slope, ways: ways as unknown as PackedIntegers['ways'], zigzag };
}

export function describeIntegers(column: PackedIntegers, head: ByteWriter): void {
  head.u8(column.order);
  head.u8(column.ways.reduce<number>((bits, way, plane) => bits | (way << (2 * plane)), 0));
  head.i32(column.base);
  if (column.order === 2) head.i32(column.slope);
}

export function writeIntegerPlane({ ways, zigzag }: PackedIntegers, plane: number, streams: StreamWriters): void {
  const way = ways[plane] as PlaneWay;
  if (way === planeWay.none) return;
  const writer = streams.of(way);
  const count = zigzag.length;
  const at = writer.reserve(count);
  const target = writer.target();
  const shift = 8 * plane;
  for (let i = 0; i < count; i += 1) target[at + i] = (zigzag[i] as number) >>> shift;
}

export function readIntegers(head: ByteReader, count: number): IntegerReader {
  const order = head.u8();
  const bits = head.u8();
  const base = head.i32();
  if (order > 2) throw new RangeError(`differences of order ${order}`);
  const slope = order === 2 ? head.i32() : 0;
  const zigzag = new Int32Array(count);
  return {
    readPlane(plane, streams) {
      const way = ((bits >>> (2 * plane)) & 3) as PlaneWay;
      if (way === planeWay.none) return;
      const bytes = streams.take(way, count);
      const shift = 8 * plane;
      if (plane === 0) for (let i = 0; i < count; i += 1) zigzag[i] = bytes[i] as number;
      else for (let i = 0; i < count; i += 1) zigzag[i] = (zigzag[i] as number) | ((bytes[i] as number) << shift);
    },
    decode: () => undoDifferences(zigzag, count, order, base, slope),
  };
}

/** Overwrites its input: the reader that owns it is used once. */
function undoDifferences(zigzag: Int32Array, count: number, order: number, base: number, slope: number): Int32Array {
  let value = base;
  let step = slope;
  for (let i = 0; i < count; i += 1) {
    const z = zigzag[i] as number;
    const d = (z >>> 1) ^ -(z & 1);
    if (order === 0) value = (base + d) | 0;
    else if (order === 1) value = (value + d) | 0;
    else if (i > 0) {
      if (i > 1) step = (step + d) | 0;
      value = (value + step) | 0;
    }
    zigzag[i] = value;
  }
  return zigzag;
}

/** The order whose differences are smallest in the mean, which is also the one with the fewest bits for noise of any bell shape. */
function cheapestOrder(values: Int32Array, count: number): DifferenceOrder {
  const base = values[0] as number;
  let v1 = base;
  let step = 0;
  let sum0 = 0;
  let sum1 = 0;
  let sum2 = 0;
  for (let i = 1; i < count; i += 1) {
    const v = values[i] as number;
    const s = (v - v1) | 0;
    sum0 += Math.abs((v - base) | 0);
    sum1 += Math.abs(s);
    sum2 += Math.abs((s - step) | 0);
    v1 = v;
    step = s;
  }
  if (sum2 < sum1 && sum2 < sum0) return 2;
  return sum1 <= sum0 ? 1 : 0;
}

const histogram = new Uint32Array(256);
const plogTable = Float64Array.from({ length: 4097 }, (_, n) => (n === 0 ? 0 : n * Math.log2(n)));
const plog = (n: number): number => (n <= 4096 ? (plogTable[n] as number) : n * Math.log2(n));

/** Below this many bits a byte, the search for repeats beats Huffman codes, which take a bit at least; above the other, nothing is gained by coding. */
const repeatBits = 0.5;
const noiseBits = 7.75;

function chooseWay(zigzag: Int32Array, count: number, plane: number, all: number): PlaneWay {
  const shift = 8 * plane;
  if (((all >>> shift) & 0xff) === 0) return planeWay.none;
  histogram.fill(0);
  for (let i = 0; i < count; i += 1) {
    const byte = ((zigzag[i] as number) >>> shift) & 0xff;
    histogram[byte] = (histogram[byte] as number) + 1;
  }
  let sum = 0;
  for (let byte = 0; byte < 256; byte += 1) sum += plog(histogram[byte] as number);
  const bits = (plog(count) - sum) / count;
  if (bits < repeatBits) return planeWay.match;
  // A short column of noise never fills its histogram: its entropy is at most log2(count).
  return bits > noiseBits - 256 / (2 * Math.LN2 * Math.max(count, 256)) ? planeWay.stored : planeWay.huffman;
}

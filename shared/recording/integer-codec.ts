/**
 * A column of int32 as differences of the cheapest order, zigzagged. Where they are noise they become Rice codes; where most of
 * them are zero (switches, held values), byte planes for DEFLATE. All arithmetic wraps at 2^32, so every input is reversible.
 */
import type { ByteReader, ByteWriter } from './bytes';
import { riceDecode, riceEncode } from './rice-code';
import { planeWay, type PlaneWay, type StreamReaders, type StreamWriters } from './streams';

export type DifferenceOrder = 0 | 1 | 2;

export type PackedIntegers = {
  readonly order: DifferenceOrder;
  /** First value, and for order 2 the first difference. */
  readonly base: number;
  readonly slope: number;
  readonly coded: { readonly way: 'rice'; readonly bytes: Uint8Array } | { readonly way: 'planes'; readonly ways: readonly PlaneWay[]; readonly zigzag: Int32Array };
};

/** Set in the order's byte when the differences are Rice codes. */
const riceBit = 8;

export type IntegerReader = {
  readPlane(plane: number, streams: StreamReaders): void;
  /** Memory that holds until the next column is decoded. */
  decode(): Int32Array;
  /** Each integer over `scale`, as float32, in memory of its own. */
  decodeOver(scale: number): Float32Array;
};

export function countIntegers(values: Int32Array, count: number): PackedIntegers {
  const order = cheapestOrder(values, count);
  const base = values[0] as number;
  const slope = order === 2 && count > 1 ? ((values[1] as number) - base) | 0 : 0;
  if (zigzagScratch.length < count) zigzagScratch = new Int32Array(count);
  const zigzag = zigzagScratch;
  zigzag[0] = 0;
  if (count > 1) zigzag[1] = 0;
  let zeros = 0;
  let all = 0;
  if (order === 0) {
    for (let i = 1; i < count; i += 1) {
      const d = ((values[i] as number) - base) | 0;
      const z = (d << 1) ^ (d >> 31);
      zigzag[i] = z;
      all |= z;
      if (z === 0) zeros += 1;
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
      if (z === 0) zeros += 1;
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
      if (z === 0) zeros += 1;
    }
  }
  if (zeros <= count / 2) return { order, base, slope, coded: { way: 'rice', bytes: riceEncode(zigzag, count).slice() } };
  const ways = [0, 1, 2, 3].map((plane) => chooseWay(zigzag, count, plane, all));
  return { order, base, slope, coded: { way: 'planes', ways, zigzag: zigzag.slice(0, count) } };
}

let zigzagScratch = new Int32Array(0);

export function describeIntegers({ order, base, slope, coded }: PackedIntegers, head: ByteWriter, streams: StreamWriters): void {
  head.u8(coded.way === 'rice' ? order | riceBit : order);
  head.i32(base);
  if (order === 2) head.i32(slope);
  if (coded.way === 'rice') {
    head.u32(coded.bytes.length);
    streams.of(planeWay.stored).bytes(coded.bytes);
  } else head.u8(coded.ways.reduce<number>((bits, way, plane) => bits | (way << (2 * plane)), 0));
}

export function writeIntegerPlane({ coded }: PackedIntegers, plane: number, streams: StreamWriters): void {
  if (coded.way === 'rice') return;
  const way = coded.ways[plane] as PlaneWay;
  if (way === planeWay.none) return;
  const writer = streams.of(way);
  const { zigzag } = coded;
  const count = zigzag.length;
  const at = writer.reserve(count);
  const target = writer.target();
  const shift = 8 * plane;
  for (let i = 0; i < count; i += 1) target[at + i] = (zigzag[i] as number) >>> shift;
}

export function readIntegers(head: ByteReader, streams: StreamReaders, count: number): IntegerReader {
  const kind = head.u8();
  const order = kind & ~riceBit;
  if (order > 2) throw new RangeError(`differences of order ${order}`);
  const base = head.i32();
  const slope = order === 2 ? head.i32() : 0;
  if (kind & riceBit) {
    const bytes = streams.take(planeWay.stored, head.u32());
    return {
      readPlane: () => undefined,
      decode: () => undoDifferences(riceDifferences(bytes, count), count, order, base, slope),
      decodeOver: (scale) => over(scale, riceDifferences(bytes, count), count, order, base, slope),
    };
  }
  const bits = head.u8();
  const zigzag = new Int32Array(count);
  return {
    readPlane(plane, from) {
      const way = ((bits >>> (2 * plane)) & 3) as PlaneWay;
      if (way === planeWay.none) return;
      const bytes = from.take(way, count);
      const shift = 8 * plane;
      for (let i = 0; i < count; i += 1) zigzag[i] = (zigzag[i] as number) | ((bytes[i] as number) << shift);
    },
    decode: () => undoDifferences(zigzag, count, order, base, slope),
    decodeOver: (scale) => over(scale, zigzag, count, order, base, slope),
  };
}

/** In memory that holds until the next column is decoded. */
function riceDifferences(bytes: Uint8Array, count: number): Int32Array {
  if (zigzagScratch.length < count) zigzagScratch = new Int32Array(count);
  riceDecode(bytes, count, zigzagScratch);
  return zigzagScratch;
}

/** Undoes the differences and divides in one pass: the same division that the grid was found with, so that the same float32 comes back. */
function over(scale: number, zigzag: Int32Array, count: number, order: number, base: number, slope: number): Float32Array {
  const out = new Float32Array(count);
  if (order === 0) {
    for (let i = 0; i < count; i += 1) {
      const z = zigzag[i] as number;
      out[i] = ((base + ((z >>> 1) ^ -(z & 1))) | 0) / scale;
    }
  } else if (order === 1) {
    let value = base;
    for (let i = 0; i < count; i += 1) {
      const z = zigzag[i] as number;
      value = (value + ((z >>> 1) ^ -(z & 1))) | 0;
      out[i] = value / scale;
    }
  } else {
    let value = base;
    let step = slope;
    out[0] = value / scale;
    for (let i = 1; i < count; i += 1) {
      const z = zigzag[i] as number;
      step = (step + ((z >>> 1) ^ -(z & 1))) | 0;
      value = (value + step) | 0;
      out[i] = value / scale;
    }
  }
  return out;
}

/** Overwrites its input: the reader that owns it is used once. */
function undoDifferences(zigzag: Int32Array, count: number, order: number, base: number, slope: number): Int32Array {
  if (order === 0) {
    for (let i = 0; i < count; i += 1) {
      const z = zigzag[i] as number;
      zigzag[i] = base + ((z >>> 1) ^ -(z & 1));
    }
  } else if (order === 1) {
    let value = base;
    for (let i = 0; i < count; i += 1) {
      const z = zigzag[i] as number;
      value = (value + ((z >>> 1) ^ -(z & 1))) | 0;
      zigzag[i] = value;
    }
  } else {
    let value = base;
    let step = slope;
    zigzag[0] = value;
    for (let i = 1; i < count; i += 1) {
      const z = zigzag[i] as number;
      step = (step + ((z >>> 1) ^ -(z & 1))) | 0;
      value = (value + step) | 0;
      zigzag[i] = value;
    }
  }
  return zigzag;
}

/** So many values in a row, at every fourth such stretch, tell which order is cheapest. */
const probeStretch = 64;

/** The order whose differences are smallest in the mean, which is also the one with the fewest bits for noise of any bell shape. */
function cheapestOrder(values: Int32Array, count: number): DifferenceOrder {
  const base = values[0] as number;
  let sum0 = 0;
  let sum1 = 0;
  let sum2 = 0;
  for (let from = 1; from < count; from += 4 * probeStretch) {
    const to = Math.min(count, from + probeStretch);
    let before = values[from - 1] as number;
    let step = from > 1 ? (before - (values[from - 2] as number)) | 0 : 0;
    for (let i = from; i < to; i += 1) {
      const value = values[i] as number;
      const next = (value - before) | 0;
      sum0 += Math.abs((value - base) | 0);
      sum1 += Math.abs(next);
      sum2 += Math.abs((next - step) | 0);
      before = value;
      step = next;
    }
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

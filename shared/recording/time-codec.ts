/** Times of a chunk: a start and a step when even, whole µs as differenced integers, else the float64 bits. */
import type { ByteReader, ByteWriter } from './bytes';
import { countIntegers, describeIntegers, readIntegers, type IntegerReader, type PackedIntegers } from './integer-codec';
import { planeWay, type StreamReaders, type StreamWriters } from './streams';

const timeKind = { even: 0, steps: 1, bits: 2 } as const;

export type PackedTimes = {
  /** Set when the times are kept as an integer column. */
  readonly column: PackedIntegers | null;
  describe(head: ByteWriter, streams: StreamWriters): void;
};

export function packTimes(timesUs: Float64Array, count: number): PackedTimes {
  const start = timesUs[0] as number;
  const step = count > 1 ? (timesUs[1] as number) - start : 0;
  if (isEven(timesUs, count, start, step)) {
    return { column: null, describe: (head) => { head.u8(timeKind.even); head.f64(start); head.f64(step); } };
  }
  const steps = wholeSteps(timesUs, count);
  if (steps) {
    const column = countIntegers(steps, count);
    return { column, describe: (head, streams) => { head.u8(timeKind.steps); head.f64(start); describeIntegers(column, head, streams); } };
  }
  return {
    column: null,
    describe: (head, streams) => {
      head.u8(timeKind.bits);
      const bytes = new Uint8Array(timesUs.buffer, timesUs.byteOffset, count * 8);
      const match = streams.of(planeWay.match);
      const at = match.reserve(count * 8);
      const target = match.target();
      for (let plane = 0; plane < 8; plane += 1) for (let i = 0; i < count; i += 1) target[at + plane * count + i] = bytes[i * 8 + plane] as number;
    },
  };
}

export type TimesReader = { readonly column: IntegerReader | null; decode(): Float64Array };

export function readTimes(head: ByteReader, streams: StreamReaders, count: number): TimesReader {
  const kind = head.u8();
  if (kind === timeKind.even) {
    const start = head.f64();
    const step = head.f64();
    return { column: null, decode: () => evenTimes(start, step, count) };
  }
  if (kind === timeKind.steps) {
    const start = head.f64();
    const column = readIntegers(head, streams, count);
    return { column, decode: () => addSteps(start, column.decode(), count) };
  }
  if (kind !== timeKind.bits) throw new RangeError(`times of kind ${kind}`);
  const shuffled = streams.take(planeWay.match, count * 8);
  return {
    column: null,
    decode: () => {
      const times = new Float64Array(count);
      const bytes = new Uint8Array(times.buffer);
      for (let plane = 0; plane < 8; plane += 1) for (let i = 0; i < count; i += 1) bytes[i * 8 + plane] = shuffled[plane * count + i] as number;
      return times;
    },
  };
}

function evenTimes(start: number, step: number, count: number): Float64Array {
  const times = new Float64Array(count);
  for (let i = 0; i < count; i += 1) times[i] = start + i * step;
  return times;
}

function isEven(timesUs: Float64Array, count: number, start: number, step: number): boolean {
  if (Object.is(start, -0)) return false;
  for (let i = 0; i < count; i += 1) if (timesUs[i] !== start + i * step) return false;
  return true;
}

/** Differences of whole µs below 2^31, first one 0; null when the times are not such. */
function wholeSteps(timesUs: Float64Array, count: number): Int32Array | null {
  const steps = new Int32Array(count);
  for (let i = 0; i < count; i += 1) {
    const time = timesUs[i] as number;
    if (!Number.isSafeInteger(time) || Object.is(time, -0)) return null;
    const step = i === 0 ? 0 : time - (timesUs[i - 1] as number);
    if (step !== (step | 0)) return null;
    steps[i] = step;
  }
  return steps;
}

function addSteps(start: number, steps: Int32Array, count: number): Float64Array {
  const times = new Float64Array(count);
  let time = start;
  for (let i = 0; i < count; i += 1) {
    time += steps[i] as number;
    times[i] = time;
  }
  return times;
}

/**
 * A stretch of a recording at some width, as the pictures need it: samples, or buckets with min, max and mean.
 *
 * Samples are buckets of no width whose three columns are the same array, so whatever draws buckets draws samples too.
 */
import type { RecordingWindow } from '@shared/api/recordings';
import type { Span } from './span';

export interface Stretch {
  readonly level: 'samples' | 'bands';
  /** The span it answers for; it may hold fewer values than that where nothing was measured. */
  readonly span: Span;
  readonly count: number;
  /** Seconds: sample times, or starts and ends of the buckets. */
  readonly startsS: Float64Array;
  readonly endsS: Float64Array;
  /** Channel after channel, `count` each; NaN is not measured. */
  readonly min: Float32Array;
  readonly max: Float32Array;
  readonly mean: Float32Array;
  /** For the cache's budget. */
  readonly bytes: number;
}

/** Bytes of the wire are unaligned views: copied once into arrays of their own. */
function float64Block(block: Uint8Array, length: number): Float64Array {
  return new Float64Array(copyExactly(block, length * 8));
}

function float32Block(block: Uint8Array, length: number): Float32Array {
  return new Float32Array(copyExactly(block, length * 4));
}

function copyExactly(block: Uint8Array, bytes: number): ArrayBuffer {
  if (block.byteLength !== bytes) throw new RangeError(`A block of ${block.byteLength} bytes came where ${bytes} were announced.`);
  const copy = new ArrayBuffer(bytes);
  new Uint8Array(copy).set(block);
  return copy;
}

/** @throws RangeError when a block is not as long as the count says */
export function stretchFromWindow(window: RecordingWindow, span: Span, channelCount: number): Stretch {
  const { count } = window;
  const size = count * channelCount;
  if (window.level === 'samples') {
    const startsS = float64Block(window.timesS, count);
    const values = float32Block(window.values, size);
    return { level: 'samples', span, count, startsS, endsS: startsS, min: values, max: values, mean: values, bytes: startsS.byteLength + values.byteLength };
  }
  const startsS = float64Block(window.startsS, count);
  const endsS = float64Block(window.endsS, count);
  const bands = float32Block(window.bands, 3 * size);
  return splitBands(bands, startsS, endsS, span, channelCount);
}

/** Channel after channel comes minima, maxima, means; here each of the three gets an array of its own. */
function splitBands(bands: Float32Array, startsS: Float64Array, endsS: Float64Array, span: Span, channelCount: number): Stretch {
  const count = startsS.length;
  const min = new Float32Array(count * channelCount);
  const max = new Float32Array(count * channelCount);
  const mean = new Float32Array(count * channelCount);
  for (let channel = 0; channel < channelCount; channel += 1) {
    const from = channel * 3 * count;
    min.set(bands.subarray(from, from + count), channel * count);
    max.set(bands.subarray(from + count, from + 2 * count), channel * count);
    mean.set(bands.subarray(from + 2 * count, from + 3 * count), channel * count);
  }
  return { level: 'bands', span, count, startsS, endsS, min, max, mean, bytes: startsS.byteLength * 2 + bands.byteLength };
}

/** Samples that are at hand already (the live ring, a test) as a stretch. */
export function stretchOfSamples(timesS: Float64Array, values: Float32Array, span: Span): Stretch {
  return { level: 'samples', span, count: timesS.length, startsS: timesS, endsS: timesS, min: values, max: values, mean: values, bytes: timesS.byteLength + values.byteLength };
}

/** Index of the last start at or before `atS`; -1 when all are later. */
export function indexAt(startsS: Float64Array, atS: number): number {
  let low = 0;
  let high = startsS.length;
  while (low < high) {
    const middle = (low + high) >> 1;
    if ((startsS[middle] ?? Infinity) <= atS) low = middle + 1;
    else high = middle;
  }
  return low - 1;
}

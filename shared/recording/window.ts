/** Answers a window of a recording from the chunks or pyramid blocks that overlap it (`chooseSource` says which). */
import type { Chunk } from './chunk';
import type { PyramidBlock } from './pyramid-block';

export type SampleWindow = {
  /** Index of the first sample; 0 when there is none. */
  first: number;
  count: number;
  timesUs: Float64Array;
  /** Channel after channel, `count` values each. */
  values: Float32Array;
};

export type BandWindow = {
  count: number;
  /** First and last sample of each bucket. */
  startsUs: Float64Array;
  endsUs: Float64Array;
  /** Channel after channel: `count` minima, then maxima, then means; NaN where nothing was measured. */
  bands: Float32Array;
};

/** @param chunks those that overlap [fromUs, toUs], in order */
export function samplesFromChunks(chunks: readonly Chunk[], fromUs: number, toUs: number): SampleWindow {
  const parts = chunks.map((chunk) => ({ chunk, from: firstAtOrAfter(chunk.timesUs, fromUs), to: firstAbove(chunk.timesUs, toUs) })).filter(({ from, to }) => to > from);
  const count = parts.reduce((sum, { from, to }) => sum + to - from, 0);
  const channels = parts[0]?.chunk.columns.length ?? 0;
  const timesUs = new Float64Array(count);
  const values = new Float32Array(count * channels);
  let at = 0;
  for (const { chunk, from, to } of parts) {
    timesUs.set(chunk.timesUs.subarray(from, to), at);
    chunk.columns.forEach((column, c) => values.set(column.subarray(from, to), c * count + at));
    at += to - from;
  }
  const head = parts[0];
  return { first: head ? head.chunk.first + head.from : 0, count, timesUs, values };
}

/** @param chunks those that overlap [fromUs, toUs], in order; folded into at most `buckets` buckets of equal sample count */
export function bandsFromChunks(chunks: readonly Chunk[], fromUs: number, toUs: number, buckets: number): BandWindow {
  const { count, timesUs, values } = samplesFromChunks(chunks, fromUs, toUs);
  const channels = count === 0 ? 0 : values.length / count;
  const column = (c: number) => values.subarray(c * count, (c + 1) * count);
  const ones = new Float32Array(count).fill(1);
  return fold({ count, startsUs: timesUs, endsUs: timesUs, channels, minimum: column, maximum: column, mean: column, measured: () => ones }, buckets);
}

/** @param blocks of one level, those that overlap [fromUs, toUs], in order; whole buckets are answered, so the first and last may reach out of the window */
export function bandsFromBlocks(blocks: readonly PyramidBlock[], fromUs: number, toUs: number, buckets: number): BandWindow {
  const parts = blocks.map((block) => ({ block, from: firstAtOrAfter(block.endsUs, fromUs), to: firstAbove(block.startsUs, toUs) })).filter(({ from, to }) => to > from);
  const count = parts.reduce((sum, { from, to }) => sum + to - from, 0);
  const gather = <A extends Float32Array | Float64Array>(out: A, of: (block: PyramidBlock) => A): A => {
    let at = 0;
    for (const { block, from, to } of parts) {
      out.set(of(block).subarray(from, to), at);
      at += to - from;
    }
    return out;
  };
  const columns = (of: (block: PyramidBlock) => Float32Array[]) => (c: number) => gather(new Float32Array(count), (block) => of(block)[c] as Float32Array);
  return fold(
    {
      count,
      startsUs: gather(new Float64Array(count), (block) => block.startsUs),
      endsUs: gather(new Float64Array(count), (block) => block.endsUs),
      channels: parts[0]?.block.minima.length ?? 0,
      minimum: columns((block) => block.minima),
      maximum: columns((block) => block.maxima),
      mean: columns((block) => block.means),
      measured: columns((block) => block.measured),
    },
    buckets,
  );
}

type Bands = {
  count: number;
  startsUs: Float64Array;
  endsUs: Float64Array;
  channels: number;
  minimum(channel: number): Float32Array;
  maximum(channel: number): Float32Array;
  mean(channel: number): Float32Array;
  /** Weight of each mean. */
  measured(channel: number): Float32Array;
};

/** Joins equal numbers of neighbours until at most `buckets` are left. */
function fold(bands: Bands, buckets: number): BandWindow {
  const group = Math.max(1, Math.ceil(bands.count / Math.max(1, buckets)));
  const count = Math.ceil(bands.count / group);
  const out = new Float32Array(3 * count * bands.channels);
  const startsUs = new Float64Array(count);
  const endsUs = new Float64Array(count);
  for (let b = 0; b < count; b += 1) {
    startsUs[b] = bands.startsUs[b * group] as number;
    endsUs[b] = bands.endsUs[Math.min(bands.count, (b + 1) * group) - 1] as number;
  }
  for (let c = 0; c < bands.channels; c += 1) {
    const [minimum, maximum, mean, measured] = [bands.minimum(c), bands.maximum(c), bands.mean(c), bands.measured(c)];
    const at = 3 * count * c;
    for (let b = 0; b < count; b += 1) {
      let low = Number.POSITIVE_INFINITY;
      let high = Number.NEGATIVE_INFINITY;
      let sum = 0;
      let weight = 0;
      const to = Math.min(bands.count, (b + 1) * group);
      for (let i = b * group; i < to; i += 1) {
        const value = mean[i] as number;
        if (value !== value) continue;
        low = Math.min(low, minimum[i] as number);
        high = Math.max(high, maximum[i] as number);
        sum += value * (measured[i] as number);
        weight += measured[i] as number;
      }
      out[at + b] = weight > 0 ? low : Number.NaN;
      out[at + count + b] = weight > 0 ? high : Number.NaN;
      out[at + 2 * count + b] = weight > 0 ? sum / weight : Number.NaN;
    }
  }
  return { count, startsUs, endsUs, bands: out };
}

function firstAtOrAfter(times: Float64Array, limit: number): number {
  return search(times, (time) => time >= limit);
}

function firstAbove(times: Float64Array, limit: number): number {
  return search(times, (time) => time > limit);
}

/** First index at which a rising array satisfies the test; its length when none does. */
function search(times: Float64Array, test: (time: number) => boolean): number {
  let low = 0;
  let high = times.length;
  while (low < high) {
    const middle = (low + high) >>> 1;
    if (test(times[middle] as number)) high = middle;
    else low = middle + 1;
  }
  return low;
}

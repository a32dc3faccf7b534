/** Builds the pyramid as chunks arrive. The same chunks give the same blocks, so a lost block is made again by feeding them once more. */
import type { Chunk } from './chunk';
import type { PyramidBlock } from './pyramid-block';
import { bucketSamples, pyramidFactor, pyramidLevels } from './pyramid-levels';

export const bucketsPerBlock = 256;

export type PyramidBuilder = {
  /** Takes the next chunk; returns the blocks that became full, of whatever level. */
  push(chunk: Chunk): PyramidBlock[];
  /** The recording is over: what is begun at every level. A builder is used for one recording. */
  finish(): PyramidBlock[];
  /** The finished buckets of a level that no block holds yet, for a recording that grows; null when there are none. */
  tail(level: number): PyramidBlock | null;
};

/** @param channelCount columns of each chunk, 24 for eight cables */
export function createPyramidBuilder(channelCount: number): PyramidBuilder {
  const levels = Array.from({ length: pyramidLevels }, (_, i) => new Level(i + 1, channelCount));
  const lowest = levels[0] as Level;
  const room = bucketSamples(1);

  const closeBucket = (index: number, full: PyramidBlock[]): void => {
    const level = levels[index] as Level;
    const parent = levels[index + 1];
    parent?.takeIn(level);
    const block = level.closeBucket();
    if (block) full.push(block);
    if (parent && parent.parts === pyramidFactor) closeBucket(index + 1, full);
  };

  return {
    push(chunk) {
      const full: PyramidBlock[] = [];
      for (let from = 0; from < chunk.count; ) {
        const to = Math.min(chunk.count, from + room - lowest.samples);
        lowest.add(chunk, from, to);
        if (lowest.samples === room) closeBucket(0, full);
        from = to;
      }
      return full;
    },
    finish() {
      const full: PyramidBlock[] = [];
      levels.forEach((level, index) => {
        if (level.samples > 0) closeBucket(index, full);
      });
      return [...full, ...levels.flatMap((level) => level.takeBlock() ?? [])];
    },
    tail: (level) => levels[level - 1]?.copyBlock() ?? null,
  };
}

/** One level: the bucket being filled and the block being filled. */
class Level {
  /** Samples in the bucket so far, and how many buckets of the level below they came in. */
  samples = 0;
  parts = 0;
  private startUs = 0;
  private endUs = 0;
  private readonly minimum: Float64Array;
  private readonly maximum: Float64Array;
  private readonly sum: Float64Array;
  private readonly measured: Float64Array;
  private block: PyramidBlock;

  constructor(private readonly level: number, private readonly channels: number) {
    this.minimum = new Float64Array(channels).fill(Number.POSITIVE_INFINITY);
    this.maximum = new Float64Array(channels).fill(Number.NEGATIVE_INFINITY);
    this.sum = new Float64Array(channels);
    this.measured = new Float64Array(channels);
    this.block = emptyBlock(level, 0, channels);
  }

  add({ timesUs, columns }: Chunk, from: number, to: number): void {
    if (this.samples === 0) this.startUs = timesUs[from] as number;
    this.endUs = timesUs[to - 1] as number;
    this.samples += to - from;
    for (let c = 0; c < this.channels; c += 1) {
      const column = columns[c] as Float32Array;
      let low = this.minimum[c] as number;
      let high = this.maximum[c] as number;
      // Carried on rather than summed apart, so that the order of additions, and with it the last bit, is the same in any chunking.
      const sumBefore = this.sum[c] as number;
      let sum = sumBefore;
      let measured = to - from;
      for (let i = from; i < to; i += 1) {
        const value = column[i] as number;
        if (value < low) low = value;
        if (value > high) high = value;
        sum += value;
      }
      // Rare: something in the stretch was not measured. Comparisons with NaN are false, so only sum and count are wrong.
      if (sum !== sum) [sum, measured] = addMeasured(sumBefore, column, from, to);
      this.minimum[c] = low;
      this.maximum[c] = high;
      this.sum[c] = sum;
      this.measured[c] = (this.measured[c] as number) + measured;
    }
  }

  /** Folds the bucket of the level below in. */
  takeIn(below: Level): void {
    if (this.samples === 0) this.startUs = below.startUs;
    this.endUs = below.endUs;
    this.samples += below.samples;
    this.parts += 1;
    for (let c = 0; c < this.channels; c += 1) {
      this.minimum[c] = Math.min(this.minimum[c] as number, below.minimum[c] as number);
      this.maximum[c] = Math.max(this.maximum[c] as number, below.maximum[c] as number);
      this.sum[c] = (this.sum[c] as number) + (below.sum[c] as number);
      this.measured[c] = (this.measured[c] as number) + (below.measured[c] as number);
    }
  }

  /** Puts the bucket into the block and empties it; returns the block when that filled it. */
  closeBucket(): PyramidBlock | null {
    const { block } = this;
    const at = block.count;
    block.startsUs[at] = this.startUs;
    block.endsUs[at] = this.endUs;
    block.samples[at] = this.samples;
    for (let c = 0; c < this.channels; c += 1) {
      const measured = this.measured[c] as number;
      (block.minima[c] as Float32Array)[at] = measured > 0 ? (this.minimum[c] as number) : Number.NaN;
      (block.maxima[c] as Float32Array)[at] = measured > 0 ? (this.maximum[c] as number) : Number.NaN;
      (block.means[c] as Float32Array)[at] = measured > 0 ? (this.sum[c] as number) / measured : Number.NaN;
      (block.measured[c] as Float32Array)[at] = measured;
    }
    block.count += 1;
    this.samples = 0;
    this.parts = 0;
    this.minimum.fill(Number.POSITIVE_INFINITY);
    this.maximum.fill(Number.NEGATIVE_INFINITY);
    this.sum.fill(0);
    this.measured.fill(0);
    return block.count === bucketsPerBlock ? this.takeBlock() : null;
  }

  takeBlock(): PyramidBlock | null {
    const block = this.copyBlock();
    if (block) this.block = emptyBlock(this.level, block.first + block.count, this.channels);
    return block;
  }

  copyBlock(): PyramidBlock | null {
    const { block } = this;
    if (block.count === 0) return null;
    const shorten = (columns: Float32Array[]) => columns.map((column) => column.slice(0, block.count));
    return {
      level: block.level,
      first: block.first,
      count: block.count,
      startsUs: block.startsUs.slice(0, block.count),
      endsUs: block.endsUs.slice(0, block.count),
      samples: block.samples.slice(0, block.count),
      minima: shorten(block.minima),
      maxima: shorten(block.maxima),
      means: shorten(block.means),
      measured: shorten(block.measured),
    };
  }
}

function addMeasured(sumBefore: number, column: Float32Array, from: number, to: number): [number, number] {
  let sum = sumBefore;
  let measured = 0;
  for (let i = from; i < to; i += 1) {
    const value = column[i] as number;
    if (value !== value) continue;
    sum += value;
    measured += 1;
  }
  return [sum, measured];
}

function emptyBlock(level: number, first: number, channels: number): PyramidBlock {
  const columns = () => Array.from({ length: channels }, () => new Float32Array(bucketsPerBlock));
  return {
    level,
    first,
    count: 0,
    startsUs: new Float64Array(bucketsPerBlock),
    endsUs: new Float64Array(bucketsPerBlock),
    samples: new Float32Array(bucketsPerBlock),
    minima: columns(),
    maxima: columns(),
    means: columns(),
    measured: columns(),
  };
}

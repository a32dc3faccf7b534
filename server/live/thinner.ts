/**
 * Thins the arriving samples of a running trial to what a room is shown.
 *
 * Between two frames every k-th sample is kept, so that a frame carries at most so many, the newest always among them. Slack
 * and saturation are told as flags, so a short one is not lost by thinning.
 */
import type { Chunk } from '@shared/recording';
import { shownEvery } from '@shared/api/live';
import { float32Block, float64Block, pack } from '@shared/link';
import type { BusEvents } from './bus';

/** What waits for a frame at most, samples: four seconds. */
const MOST_WAITING = 1000;

export class Thinner {
  private pending: { timeUs: number; values: Float32Array }[] = [];
  private last: Pick<BusEvents['samples'], 'trialId' | 'recordingId' | 'channels' | 'arrivedUs'> | null = null;
  /** Samples to go until the next kept one. */
  private skip = 0;

  push({ chunk, rateHz, ...about }: BusEvents['samples']): void {
    this.last = about;
    const every = shownEvery(rateHz);
    let i = this.skip;
    for (; i < chunk.count; i += every) this.pending.push({ timeUs: chunk.timesUs[i] as number, values: sampleAt(chunk, i) });
    this.skip = i - chunk.count;
    // Nobody took a frame for seconds: the oldest go, newest first is what a late viewer wants.
    if (this.pending.length > MOST_WAITING) this.pending.splice(0, this.pending.length - MOST_WAITING);
  }

  /** One MessagePack frame of everything since the last; null when nothing came. */
  frame(): Uint8Array | null {
    const { last, pending } = this;
    if (last === null || pending.length === 0) return null;
    const count = pending.length;
    const timesS = Float64Array.from(pending, ({ timeUs }) => timeUs / 1e6);
    const values = new Float32Array(count * last.channels.length);
    pending.forEach((sample, i) => {
      for (let c = 0; c < last.channels.length; c += 1) values[c * count + i] = sample.values[c] as number;
    });
    this.pending = [];
    return pack({
      type: 'samples', trial: last.trialId, recording: last.recordingId, arrivedUs: last.arrivedUs, count,
      timesS: float64Block(timesS), values: float32Block(values),
    });
  }
}

function sampleAt({ columns }: Chunk, i: number): Float32Array {
  const values = new Float32Array(columns.length);
  for (let c = 0; c < columns.length; c += 1) values[c] = (columns[c] as Float32Array)[i] as number;
  return values;
}

/** Sample count, duration, gaps and statistics of a recording, gathered chunk by chunk in constant memory (but for the gap list). */
import type { Chunk } from './chunk';

/** `missing`: how many samples a step of that length leaves out at the nominal rate. */
export type Gap = { readonly startS: number; readonly endS: number; readonly missing: number };

export type ChannelStatistics = {
  /** Samples that were measured. */
  readonly measured: number;
  /** NaN when nothing was measured. */
  readonly minimum: number;
  readonly maximum: number;
  readonly mean: number;
};

export type RecordingSummary = {
  readonly samples: number;
  /** First and last sample, s; 0 when there is none. */
  readonly startS: number;
  readonly endS: number;
  readonly gaps: readonly Gap[];
  readonly channels: readonly ChannelStatistics[];
};

export type RecordingSummer = { push(chunk: Chunk): void; result(): RecordingSummary };

/** A step above this many periods is a gap (CONTRACTS.md section 2). */
export const gapPeriods = 1.5;

export function recordingSummer(channelCount: number, rateHz: number): RecordingSummer {
  const periodUs = 1e6 / rateHz;
  const gaps: Gap[] = [];
  const measured = new Float64Array(channelCount);
  const minimum = new Float64Array(channelCount).fill(Number.POSITIVE_INFINITY);
  const maximum = new Float64Array(channelCount).fill(Number.NEGATIVE_INFINITY);
  const sum = new Float64Array(channelCount);
  let samples = 0;
  let startUs = 0;
  let lastUs = 0;
  return {
    push({ count, timesUs, columns }) {
      for (let i = 0; i < count; i += 1) {
        const timeUs = timesUs[i] as number;
        if (samples === 0 && i === 0) startUs = timeUs;
        else if (timeUs - lastUs > gapPeriods * periodUs) {
          gaps.push({ startS: lastUs / 1e6, endS: timeUs / 1e6, missing: Math.max(1, Math.round((timeUs - lastUs) / periodUs) - 1) });
        }
        lastUs = timeUs;
      }
      samples += count;
      for (let c = 0; c < channelCount; c += 1) {
        const column = columns[c] as Float32Array;
        for (let i = 0; i < count; i += 1) {
          const value = column[i] as number;
          if (value !== value) continue;
          measured[c] = (measured[c] as number) + 1;
          sum[c] = (sum[c] as number) + value;
          if (value < (minimum[c] as number)) minimum[c] = value;
          if (value > (maximum[c] as number)) maximum[c] = value;
        }
      }
    },
    result: () => ({
      samples,
      startS: startUs / 1e6,
      endS: lastUs / 1e6,
      gaps: [...gaps],
      channels: Array.from({ length: channelCount }, (_, c) => {
        const n = measured[c] as number;
        const none = n === 0;
        return { measured: n, minimum: none ? Number.NaN : (minimum[c] as number), maximum: none ? Number.NaN : (maximum[c] as number), mean: none ? Number.NaN : (sum[c] as number) / n };
      }),
    }),
  };
}

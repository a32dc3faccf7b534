/**
 * The overview pyramid of one hour at 1 kHz: 24 channels x 3.6 million samples. Its making is measured in CPU seconds beside one bare
 * pass over the same samples (least, most, sum), its stored size beside the raw float32. The hour is reference session-a over
 * and over, its clock going on, each chunk with columns of its own so that all 346 MB come from memory.
 */
import { readFileSync } from 'node:fs';
import { gunzipSync } from 'node:zlib';
import { packBlock } from '@server/ingest/zlib-codec';
import { createCsvReader, createPyramidBuilder, type Chunk, type PyramidBlock } from '@shared/recording';
import type { Row } from './row';

export const name = 'pyramid';

const hour = 3_600_000;

/** Chunks of a second; the last one is cut so that the hour has exactly its samples. */
function* hourOf(minute: readonly Chunk[]): Generator<Chunk> {
  const last = minute.at(-1) as Chunk;
  const lengthUs = (last.timesUs[last.count - 1] as number) + 1000;
  for (let first = 0, n = 0; first < hour; n += 1) {
    for (const chunk of minute) {
      const count = Math.min(chunk.count, hour - first);
      if (count === 0) return;
      yield { first, count, timesUs: chunk.timesUs.map((us) => us + n * lengthUs), columns: chunk.columns.map((column) => column.slice(0, count)) };
      first += count;
    }
  }
}

function cpuSeconds(work: () => void): number {
  const from = process.cpuUsage();
  work();
  const { user, system } = process.cpuUsage(from);
  return (user + system) / 1e6;
}

const leastOf = (times: number, work: () => void): number => Math.min(...Array.from({ length: times }, () => cpuSeconds(work)));

/** What no pyramid can do without: every sample read once. */
function barePass(chunks: readonly Chunk[]): number {
  let all = 0;
  for (const { count, columns } of chunks) {
    for (const column of columns) {
      let [low, high, sum] = [Infinity, -Infinity, 0];
      for (let i = 0; i < count; i += 1) {
        const value = column[i] as number;
        if (value < low) low = value;
        if (value > high) high = value;
        sum += value;
      }
      all += low + high + sum;
    }
  }
  return all;
}

function build(chunks: readonly Chunk[]): PyramidBlock[] {
  const builder = createPyramidBuilder(chunks[0]?.columns.length ?? 0);
  return [...chunks.flatMap((chunk) => builder.push(chunk)), ...builder.finish()];
}

export async function run(): Promise<Row[]> {
  const reader = createCsvReader({ cableCount: 8, chunkSamples: 1000 });
  const minute = [...reader.push(gunzipSync(readFileSync(new URL('../conformance/recordings/session-a.csv.gz', import.meta.url)))), ...reader.finish()];
  const chunks = [...hourOf(minute)];
  const channels = chunks[0]?.columns.length ?? 0;
  const samples = chunks.reduce((sum, { count }) => sum + count, 0);
  if (channels !== 24 || samples !== hour) throw new Error(`this is to be 24 x ${hour} samples, not ${channels} x ${samples}`);

  const bare = leastOf(3, () => void barePass(chunks));
  const making = leastOf(3, () => void build(chunks));
  const blocks = build(chunks);
  let bytes = 0;
  const storing = cpuSeconds(() => { bytes = blocks.reduce((sum, block) => sum + packBlock(block).length, 0); });
  const raw = 4 * channels * samples;
  return [
    { name: 'an hour of 24 channels at 1 kHz', value: making, unit: 's', baseline: `a bare pass ${bare.toFixed(2)} s`, ratio: bare / making, target: 'under 1 s', met: making < 1 },
    { name: 'its blocks into bytes', value: storing, unit: 's', baseline: `making it ${making.toFixed(2)} s`, ratio: making / storing, target: 'informs', met: null },
    { name: 'stored', value: (100 * bytes) / raw, unit: '% of raw', baseline: `raw ${(raw / 1e6).toFixed(0)} MB`, ratio: raw / bytes, target: 'under 5 % of raw', met: bytes < 0.05 * raw },
  ];
}

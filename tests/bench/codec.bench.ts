/**
 * The chunk codec on the reference recordings: stored size against the order-0 entropy of their second differences (Shannon
 * 1948), and speed against DEFLATE level 1 of byte-shuffled columns in the same run. Chunks of a second. "Grid" is the recording as
 * its sensors print it; off it the same values times the golden ratio, so that they lie on no decimal grid and every float32 has all its digits.
 */
import { readFileSync } from 'node:fs';
import { deflateRawSync, gunzipSync, gzipSync, inflateRawSync } from 'node:zlib';
import { packChunk, unpackChunk } from '@server/ingest/zlib-codec';
import { createCsvReader, type Chunk } from '@shared/recording';
import type { Row } from './row';

export const name = 'codec';

const text = gunzipSync(readFileSync(new URL('../conformance/recordings/session-a.csv.gz', import.meta.url)));

function read(): { chunks: Chunk[]; decimals: readonly number[] } {
  const reader = createCsvReader({ cableCount: 8, chunkSamples: 1000 });
  const chunks = [...reader.push(text), ...reader.finish()];
  return { chunks, decimals: reader.decimals.channels };
}

/** Bits a sample of all channels: entropy of the second differences of the grid's integers, channel by channel over the whole. */
function entropyBytes(chunks: readonly Chunk[], decimals: readonly number[]): number {
  let bits = 0;
  decimals.forEach((d, c) => {
    const counts = new Map<number, number>();
    let [before, beforeThat, n] = [0, 0, 0];
    for (const chunk of chunks) {
      for (let i = 0; i < chunk.count; i += 1) {
        const value = Math.round((chunk.columns[c]?.[i] as number) * 10 ** d);
        const second = value - 2 * before + beforeThat;
        counts.set(second, (counts.get(second) ?? 0) + 1);
        beforeThat = before;
        before = value;
        n += 1;
      }
    }
    for (const count of counts.values()) bits -= (count / n) * Math.log2(count / n);
  });
  return bits / 8;
}

/** All columns of a chunk, byte planes one after another, DEFLATE level 1: what one would do without a codec of one's own. */
function shuffled(chunk: Chunk): Buffer {
  const planes = Buffer.alloc(4 * chunk.count * chunk.columns.length);
  let at = 0;
  for (const column of chunk.columns) {
    const bytes = Buffer.from(column.buffer, column.byteOffset, 4 * chunk.count);
    for (let plane = 0; plane < 4; plane += 1) for (let i = plane; i < bytes.length; i += 4) planes[at++] = bytes[i] as number;
  }
  return planes;
}

function unshuffled(planes: Buffer, count: number, width: number): Float32Array[] {
  return Array.from({ length: width }, (_, c) => {
    const bytes = Buffer.alloc(4 * count);
    for (let plane = 0; plane < 4; plane += 1) for (let i = 0; i < count; i += 1) bytes[4 * i + plane] = planes[c * 4 * count + plane * count + i] as number;
    return new Float32Array(bytes.buffer, bytes.byteOffset, count);
  });
}

/** CPU seconds of each at its fastest, in turns: what else the machine does falls on both alike. */
function fastest(times: number, ours: () => void, theirs: () => void): [number, number] {
  const least: [number, number] = [Infinity, Infinity];
  for (let i = 0; i < times; i += 1) {
    [ours, theirs].forEach((work, which) => {
      const from = process.cpuUsage();
      work();
      const { user, system } = process.cpuUsage(from);
      least[which] = Math.min(least[which] as number, (user + system) / 1e6);
    });
  }
  return least;
}

const same = (a: Float32Array, b: Float32Array): boolean => Buffer.compare(Buffer.from(a.buffer, a.byteOffset, a.byteLength), Buffer.from(b.buffer, b.byteOffset, b.byteLength)) === 0;

export async function run(): Promise<Row[]> {
  const { chunks, decimals } = read();
  const plain: Chunk[] = chunks.map((chunk) => ({ ...chunk, columns: chunk.columns.map((column) => column.map((value) => value * 1.618034)) }));
  const samples = chunks.reduce((sum, chunk) => sum + chunk.count, 0);
  const raw = samples * 4 * decimals.length;
  const sizeOf = (of: readonly Chunk[], pack: (chunk: Chunk) => Uint8Array) => of.reduce((sum, chunk) => sum + pack(chunk).length, 0);

  for (const chunk of [...chunks, ...plain]) {
    const back = unpackChunk(packChunk(chunk));
    if (!chunk.columns.every((column, c) => same(column.subarray(0, chunk.count), back.columns[c] as Float32Array))) throw new Error('the codec lost a bit');
  }

  const entropy = entropyBytes(chunks, decimals);
  const perSample = sizeOf(chunks, packChunk) / samples;
  const shuffledSize = sizeOf(chunks, (chunk) => deflateRawSync(shuffled(chunk), { level: 1 })) / samples;
  const csvSize = gzipSync(text).length / samples;
  const plainShare = sizeOf(plain, packChunk) / raw;

  const packed = chunks.map(packChunk);
  const deflated = chunks.map((chunk) => deflateRawSync(shuffled(chunk), { level: 1 }));
  const [encode, encodeThere] = fastest(12, () => chunks.forEach(packChunk), () => chunks.forEach((chunk) => deflateRawSync(shuffled(chunk), { level: 1 })));
  const [decode, decodeThere] = fastest(12, () => packed.forEach(unpackChunk), () => deflated.forEach((bytes, i) => unshuffled(inflateRawSync(bytes), chunks[i]?.count ?? 0, decimals.length)));
  const mbs = (seconds: number) => raw / 1e6 / seconds;
  return [
    { name: 'stored, on the grid', value: perSample, unit: 'B a sample', baseline: `entropy ${entropy.toFixed(2)} B`, ratio: entropy / perSample, target: 'at most 1.10 x the entropy', met: perSample <= 1.1 * entropy },
    { name: 'beside it: shuffle + DEFLATE 1', value: shuffledSize, unit: 'B a sample', baseline: `ours ${perSample.toFixed(2)} B`, ratio: perSample / shuffledSize, target: 'informs', met: null },
    { name: 'beside it: CSV + gzip', value: csvSize, unit: 'B a sample', baseline: `ours ${perSample.toFixed(2)} B`, ratio: perSample / csvSize, target: 'informs', met: null },
    { name: 'stored, off the grid', value: plainShare, unit: 'of raw', baseline: 'raw float32', ratio: 1 / plainShare, target: 'at most 0.50 of raw', met: plainShare <= 0.5 },
    { name: 'encoded', value: mbs(encode), unit: 'MB/s', baseline: `shuffle + DEFLATE 1 ${mbs(encodeThere).toFixed(0)} MB/s`, ratio: encodeThere / encode, target: '2 x or more', met: encodeThere / encode >= 2 },
    { name: 'decoded', value: mbs(decode), unit: 'MB/s', baseline: `inflate + unshuffle ${mbs(decodeThere).toFixed(0)} MB/s`, ratio: decodeThere / decode, target: '1.5 x or more', met: decodeThere / decode >= 1.5 },
  ];
}

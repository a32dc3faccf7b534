/** Answers a span of a recording from bounded data: samples, chunks folded, or pyramid blocks. */
import { type BandWindow, bandsFromBlocks, bandsFromChunks, type Chunk, chooseSource, type SampleWindow, samplesFromChunks } from '@shared/recording';
import type { Database } from '../db/engine';
import { blocksBetween, chunksAfter, chunksBetween, coveredUs, tailOf } from './queries';
import { asChunk, unpackTail } from './received-batch';
import { unpackBlock, unpackChunk } from './zlib-codec';

export interface WindowOf {
  readonly id: string;
  readonly rateHz: number;
  readonly growing: boolean;
}

export type ReadWindow = { readonly level: 'samples'; readonly window: SampleWindow } | { readonly level: 'bands'; readonly window: BandWindow };

/** @param span µs since the recording's start, both ends included */
export async function readWindow(db: Database, recording: WindowOf, span: { fromUs: number; toUs: number; buckets: number }): Promise<ReadWindow> {
  const { fromUs, toUs, buckets } = span;
  const source = chooseSource({ fromUs, toUs, buckets, rateHz: recording.rateHz });
  if (source.from !== 'blocks') {
    const chunks = [...(await chunksBetween(db, recording.id, fromUs, toUs)).map(({ data }) => unpackChunk(data)), ...(recording.growing ? await tailChunks(db, recording.id) : [])];
    return source.from === 'samples'
      ? { level: 'samples', window: samplesFromChunks(chunks, fromUs, toUs) }
      : { level: 'bands', window: bandsFromChunks(chunks, fromUs, toUs, buckets) };
  }
  const blocks = (await blocksBetween(db, recording.id, source.level, fromUs, toUs)).map(({ data }) => unpackBlock(data));
  if (!recording.growing) return { level: 'bands', window: bandsFromBlocks(blocks, fromUs, toUs, buckets) };

  // What grows is ahead of its blocks by a block at most; that rest comes from the chunks, each part with its share of the width.
  const covered = await coveredUs(db, recording.id, source.level);
  if (covered >= toUs) return { level: 'bands', window: bandsFromBlocks(blocks, fromUs, toUs, buckets) };
  const rest = [...(await chunksAfter(db, recording.id, covered)).map(({ data }) => unpackChunk(data)), ...(await tailChunks(db, recording.id))];
  const restFrom = Math.max(fromUs, covered + 1);
  const share = Math.max(1, Math.min(buckets - 1, Math.round((buckets * (toUs - restFrom)) / (toUs - fromUs))));
  const parts = [bandsFromBlocks(blocks, fromUs, Math.min(toUs, covered), buckets - share), bandsFromChunks(rest, restFrom, toUs, share)];
  return { level: 'bands', window: joinBands(parts.filter(({ count }) => count > 0)) };
}

async function tailChunks(db: Database, recordingId: string): Promise<Chunk[]> {
  const batches = (await tailOf(db, recordingId)).flatMap(({ data }) => unpackTail(data));
  let first = 0;
  return batches.map((batch) => {
    const chunk = asChunk(batch, first);
    first += batch.count;
    return chunk;
  });
}

function joinBands(parts: readonly BandWindow[]): BandWindow {
  const [only] = parts;
  if (only !== undefined && parts.length === 1) return only;
  const count = parts.reduce((sum, part) => sum + part.count, 0);
  const rows = only === undefined ? 0 : only.bands.length / only.count;
  const joined: BandWindow = { count, startsUs: new Float64Array(count), endsUs: new Float64Array(count), bands: new Float32Array(rows * count) };
  let at = 0;
  for (const part of parts) {
    joined.startsUs.set(part.startsUs, at);
    joined.endsUs.set(part.endsUs, at);
    for (let row = 0; row < rows; row += 1) joined.bands.set(part.bands.subarray(row * part.count, (row + 1) * part.count), row * count + at);
    at += part.count;
  }
  return joined;
}

/**
 * What grows with a recording: its chunks, its pyramid, its digest, its gaps and statistics, fed chunk by chunk.
 *
 * The recorder and the filing of finished recordings use the same one, so a streamed and an imported recording of the
 * same samples are the same in every byte.
 */
import { createHash } from 'node:crypto';
import { bucketsPerBlock, type Chunk, createPyramidBuilder, type PyramidBlock, recordingSummer, sampleHasher } from '@shared/recording';
import type { ChunkRow, NewRecording, PyramidRow } from './queries';
import { packBlock, packChunk } from './zlib-codec';

export interface Sealer {
  /** Encodes the next chunk. */
  seal(chunk: Chunk): { chunk: ChunkRow; pyramid: PyramidRow[] };
  /** Takes a chunk that is stored already, to go on after it. */
  replay(chunk: Chunk): void;
  /** Only once. */
  finish(): Finished;
}

/** What closing writes: the last blocks, and digest, gaps and statistics. */
export interface Finished {
  readonly pyramid: readonly PyramidRow[];
  readonly values: Pick<NewRecording, 'digest' | 'statistics' | 'gaps' | 'samples'>;
}

/** @param gapsListed most gaps in the list; further ones show in the sample times only */
export function createSealer(recordingId: string, channels: readonly string[], rateHz: number, gapsListed: number): Sealer {
  const pyramid = createPyramidBuilder(channels.length);
  const summer = recordingSummer(channels.length, rateHz);
  const hash = createHash('sha256');
  const hasher = sampleHasher(channels, hash);
  let n = 0;

  const row = (block: PyramidBlock): PyramidRow => ({
    recordingId,
    level: block.level,
    n: Math.floor(block.first / bucketsPerBlock),
    t0Us: block.startsUs[0] ?? 0,
    t1Us: block.endsUs[block.count - 1] ?? 0,
    data: packBlock(block),
  });

  function feed(chunk: Chunk): PyramidBlock[] {
    n += 1;
    hasher.push(chunk);
    summer.push(chunk);
    return pyramid.push(chunk);
  }

  return {
    seal(chunk) {
      const number = n;
      const blocks = feed(chunk);
      return {
        chunk: {
          recordingId, n: number, first: chunk.first, count: chunk.count,
          t0Us: chunk.timesUs[0] ?? 0, t1Us: chunk.timesUs[chunk.count - 1] ?? 0, data: packChunk(chunk),
        },
        pyramid: blocks.map(row),
      };
    },
    replay(chunk) {
      feed(chunk);
    },
    finish() {
      const summary = summer.result();
      const statistics = Object.fromEntries(channels.map((name, c) => {
        const { measured = 0, minimum = 0, maximum = 0, mean = 0 } = summary.channels[c] ?? {};
        const none = measured === 0;
        return [name, { min: none ? 0 : minimum, max: none ? 0 : maximum, mean: none ? 0 : mean, missing: summary.samples - measured }];
      }));
      return {
        pyramid: pyramid.finish().map(row),
        values: { digest: hash.digest('hex'), statistics, samples: summary.samples, gaps: summary.gaps.slice(0, gapsListed).map((gap) => ({ ...gap })) },
      };
    },
  };
}

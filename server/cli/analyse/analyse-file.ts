/** Streams a recording file, plain or gzipped, through the analysis. */
import { createReadStream } from 'node:fs';
import { stat } from 'node:fs/promises';
import type { Readable } from 'node:stream';
import { createGunzip } from 'node:zlib';
import type { Rules } from '@shared/flags';
import { createCsvReader, describeCsvFault, parseChannels, type Chunk, type CsvReader } from '@shared/recording';
import type { RigModel } from '@shared/rig';
import { createAnalyser, type Analyser, type Analysis } from './analyser';
import { asInputFault, InputFault } from './input-fault';

/**
 * @param onProgress share of the file read, 0 to 1
 * @throws InputFault with the first twenty faults of the file
 */
export async function analyseFile(path: string, rig: RigModel, rules: Rules, onProgress: (share: number) => void): Promise<Analysis> {
  const reader = createCsvReader({ cableCount: rig.cableCount });
  let analyser: Analyser | null = null;
  const take = (chunks: readonly Chunk[]): void => {
    if (reader.faults.length > 0 || chunks.length === 0) return;
    const running = (analyser ??= analyserFor(path, reader, rig, rules));
    for (const chunk of chunks) running.push(chunk);
  };
  try {
    const { size } = await stat(path);
    const file = createReadStream(path, { highWaterMark: 1 << 18 });
    for await (const piece of path.endsWith('.gz') ? unzipped(file) : file) {
      take(reader.push(piece as Uint8Array));
      onProgress(size > 0 ? file.bytesRead / size : 1);
      if (reader.faults.length >= 20) break;
    }
  } catch (error) {
    throw asInputFault(error, path);
  }
  take(reader.finish());
  if (reader.faults.length > 0) throw new InputFault(reader.faults.map((fault) => `${path}: ${describeCsvFault(fault)}`));
  return (analyser ?? analyserFor(path, reader, rig, rules)).finish();
}

/** `pipe` does not pass errors on: a file that breaks off must break the unpacking too. */
function unzipped(file: Readable): Readable {
  const gunzip = createGunzip({ chunkSize: 1 << 18 });
  file.on('error', (error) => gunzip.destroy(error));
  return file.pipe(gunzip);
}

function analyserFor(path: string, reader: CsvReader, rig: RigModel, rules: Rules): Analyser {
  const channels = parseChannels(reader.channels, rig.cableCount);
  if (!channels.ok) throw new InputFault([`${path}: ${channels.error.message} (${channels.error.code})`]);
  return createAnalyser(rig, channels.map, rules);
}

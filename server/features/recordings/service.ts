/** Windows into recordings, and recordings as files. */
import type { QueryOf } from '@shared/api/contract';
import type { getWindow, RecordingWindow } from '@shared/api/recordings';
import { float32Block, float64Block } from '@shared/link';
import { createCsvPrinter } from '@shared/recording';
import type { Database } from '../../db/engine';
import { readChunks, type ReadWindow, readWindow } from '../../ingest';
import { refuse } from './errors';
import { findRecording, findRecordingOfTrial } from './queries';

export type RecordingService = ReturnType<typeof createRecordingService>;

export function createRecordingService(db: Database) {
  return {
    /** @returns the window, and a tag when it can never change again */
    async window(recordingId: string, { from, to, buckets }: QueryOf<typeof getWindow>): Promise<{ body: RecordingWindow; tag: string | null }> {
      if (!(to > from)) throw refuse('SPAN_ORDER');
      const recording = await findRecording(db, recordingId);
      if (recording === null) throw refuse('RECORDING_UNKNOWN');
      const growing = recording.state === 'growing';
      const read = await readWindow(db, { id: recording.id, rateHz: recording.rateHz, growing }, { fromUs: from * 1e6, toUs: to * 1e6, buckets });
      return { body: inSeconds(read), tag: growing || recording.digest === null ? null : `"${recording.digest.slice(0, 16)}-${from}-${to}-${buckets}"` };
    },

    /** Name and text of a recording file, piece by piece. */
    async csv(trialId: string): Promise<{ name: string; pieces: AsyncGenerator<string> }> {
      const recording = await findRecordingOfTrial(db, trialId);
      if (recording === null) throw refuse('NOT_RECORDED');
      const printer = createCsvPrinter(recording.channels, recording.decimals ?? undefined);
      async function* pieces() {
        yield printer.header();
        for await (const chunk of readChunks(db, recording?.id ?? '')) yield printer.rows(chunk);
      }
      return { name: `visit-${recording.visit}-trial-${recording.number}.csv`, pieces: pieces() };
    },
  };
}

function inSeconds(read: ReadWindow): RecordingWindow {
  const seconds = (timesUs: Float64Array) => float64Block(timesUs.map((us) => us / 1e6));
  if (read.level === 'samples') {
    const { first, count, timesUs, values } = read.window;
    return { level: 'samples', first, count, timesS: seconds(timesUs), values: float32Block(values) };
  }
  const { count, startsUs, endsUs, bands } = read.window;
  return { level: 'bands', count, startsS: seconds(startsUs), endsS: seconds(endsUs), bands: float32Block(bands) };
}

/**
 * Windows into a recording, in binary.
 *
 * The body is one MessagePack map (`recordingWindow`); number columns inside are little-endian blocks, to be copied
 * into aligned typed arrays by the reader. `level` 'samples' carries every sample of the span, 'bands' at most
 * `buckets` buckets with min, max and mean. A bucket or sample that was not measured is NaN.
 */
import { z } from 'zod';
import { line, problem, recordingId, trialId, wallTime } from './common';
import { route } from './contract';

export const windowQuery = z.object({
  /** Start and end of the span, seconds of the recording's own clock. */
  from: z.coerce.number().min(0),
  to: z.coerce.number().positive(),
  /** The most buckets that the reader can show. */
  buckets: z.coerce.number().int().min(16).max(8192).default(2048),
});

const block = z.custom<Uint8Array>((value) => value instanceof Uint8Array, 'Bytes');

export const recordingWindow = z.discriminatedUnion('level', [
  z.object({
    level: z.literal('samples'),
    /** Index of the first sample in the recording. */
    first: z.number().int(),
    count: z.number().int(),
    /** float64 seconds, `count` of them. */
    timesS: block,
    /** float32, channel after channel, `count` values each, in the order of the recording's channels. */
    values: block,
  }),
  z.object({
    level: z.literal('bands'),
    count: z.number().int(),
    /** float64 seconds: start of each bucket, `count` of them. */
    startsS: block,
    /** float64 seconds: end of each bucket. */
    endsS: block,
    /** float32, channel after channel: count minima, then count maxima, then count means. */
    bands: block,
  }),
]);
export type RecordingWindow = z.infer<typeof recordingWindow>;

export const getWindow = route({
  id: 'recordings.window',
  method: 'GET',
  path: '/api/recordings/:recordingId/window',
  summary: 'A span of a recording as samples or as min/max/mean buckets (MessagePack)',
  params: z.object({ recordingId }),
  query: windowQuery,
  binary: 'application/vnd.msgpack',
});

/** Lines of the answer to an import, one JSON value each: how far it is, then how it ended. */
export const importLine = z.discriminatedUnion('state', [
  z.object({ state: z.literal('storing'), samples: z.number().int(), of: z.number().int() }),
  z.object({ state: z.literal('done'), recordingId, samples: z.number().int(), durationS: z.number(), rateHz: z.number(), gaps: z.number().int() }),
  z.object({ state: z.literal('failed'), problem }),
]);
export type ImportLine = z.infer<typeof importLine>;

export const importRecording = route({
  id: 'recordings.import',
  method: 'POST',
  path: '/api/trials/:trialId/recording',
  summary: 'File a recording as a planned trial: a CSV, gzipped or not, is looked through whole before anything of it is kept; faults are answered by line and column',
  params: z.object({ trialId }),
  query: z.object({
    fileName: line(200),
    /** Wall time of the first sample; without it the time of the import. */
    startedAt: wallTime.optional(),
  }),
  takes: ['text/csv', 'application/gzip'],
  binary: 'application/x-ndjson',
});

export const exportCsv = route({
  id: 'recordings.csv',
  method: 'GET',
  path: '/api/trials/:trialId/recording.csv',
  summary: 'The recording of a trial as CSV, streamed; gzipped with gz=1',
  params: z.object({ trialId }),
  query: z.object({ gz: z.enum(['0', '1']).default('0') }),
  binary: 'text/csv',
});

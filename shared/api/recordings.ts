/**
 * Windows into a recording, in binary.
 *
 * The body is one MessagePack map (`recordingWindow`); number columns inside are little-endian blocks, to be copied
 * into aligned typed arrays by the reader. `level` 'samples' carries every sample of the span, 'bands' at most
 * `buckets` buckets with min, max and mean. A bucket or sample that was not measured is NaN.
 */
import { z } from 'zod';
import { recordingId, trialId } from './common';
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

export const exportCsv = route({
  id: 'recordings.csv',
  method: 'GET',
  path: '/api/trials/:trialId/recording.csv',
  summary: 'The recording of a trial as CSV, streamed',
  params: z.object({ trialId }),
  binary: 'text/csv',
});

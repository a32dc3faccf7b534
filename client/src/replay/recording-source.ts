/** A stored recording as a source: the window cache over the HTTP route. */
import { unpack } from 'msgpackr/unpack';
import { getWindow, recordingWindow } from '@shared/api/recordings';
import type { RecordingMeta } from '@shared/api/sessions';
import { parseChannels, type ChannelMap } from '@shared/recording/channels';
import { unreadableProblem } from '../lib/api-problem';
import { callBytes } from '../lib/api';
import { stretchFromWindow } from './stretch';
import { createWindowCache, type LoadWindow, type RecordingShape, type WindowCache } from './window-cache';

/** @throws ApiProblem NETWORK, ANSWER_UNREADABLE or the server's code; the signal's abort error when taken back */
export const loadWindow = (recordingId: RecordingMeta['id'], channelCount: number): LoadWindow => async (span, buckets, signal) => {
  const bytes = await callBytes(getWindow, { params: { recordingId }, query: { from: span.fromS, to: span.toS, buckets }, signal });
  const parsed = recordingWindow.safeParse(unpack(bytes));
  if (!parsed.success) throw unreadableProblem(200);
  return stretchFromWindow(parsed.data, span, channelCount);
};

export function shapeOf(recording: RecordingMeta, channels: ChannelMap): RecordingShape {
  return {
    channels,
    rateHz: recording.rateHz,
    durationS: Math.max(0, recording.durationS),
    gaps: recording.gaps,
    growing: recording.state === 'growing',
  };
}

/** Null when the recording's channels do not fit the rig (another revision was bound by hand). */
export function recordingSource(recording: RecordingMeta, cableCount: number): WindowCache | null {
  const parsed = parseChannels(recording.channels, cableCount);
  if (!parsed.ok) return null;
  return createWindowCache(shapeOf(recording, parsed.map), loadWindow(recording.id, recording.channels.length));
}

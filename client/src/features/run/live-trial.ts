/** What a running trial tells: its samples into a live source, its flags and marks into the page. */
import { useEffect, useMemo, useState } from 'react';
import { unpack } from 'msgpackr/unpack';
import type { TrialId } from '@shared/api/common';
import { liveSamples, shownEvery, type LiveFromServer } from '@shared/api/live';
import type { RecordingMeta } from '@shared/api/sessions';
import { parseChannels } from '@shared/recording/channels';
import { createLiveSource, LIVE_PAGE_S, type LiveSource } from '../../replay/live/live-source';
import { createPlayer, type Player } from '../../replay/player';
import { loadWindow } from '../../replay/recording-source';
import type { Span } from '../../replay/span';
import type { MarkedFlag } from '../../replay/stave/draw-marks';

export interface LiveFlag extends MarkedFlag {
  readonly open: boolean;
}

export interface Mark {
  readonly atS: number;
  readonly label: string;
}

/** A player over a source that grows by itself; its clock stands at the newest sample. */
export interface LivePlayer extends Player {
  readonly source: LiveSource;
}

/** By then what came over the line is durable and can be read, s. */
const BOOKED_AFTER_S = 1;
/** One window of the server holds so many samples at most. */
const MOST_SAMPLES = 8192;

/** Null when the recording's channels do not fit the rig. */
export function useLivePlayer(recording: RecordingMeta, cableCount: number): LivePlayer | null {
  const { id, rateHz } = recording;
  const channels = recording.channels.join(' ');
  const player = useMemo(() => {
    const parsed = parseChannels(channels.split(' '), cableCount);
    if (!parsed.ok) return null;
    const source = createLiveSource(parsed.map, rateHz / shownEvery(rateHz));
    return { ...createPlayer(source), source };
  }, [channels, cableCount, rateHz]);

  useEffect(() => {
    if (!player) return;
    const { source, clock } = player;
    const stopPlayer = player.start();
    const stopSeeking = source.onChange(() => clock.seek(source.newestS));
    return () => {
      stopSeeking();
      stopPlayer();
    };
  }, [player]);

  // The seconds before this page was opened, so that a reload in the middle of a trial shows no blank page.
  const channelCount = recording.channels.length;
  const [openedAtS] = useState(recording.durationS);
  useEffect(() => {
    if (!player) return;
    const { source } = player;
    const controller = new AbortController();
    const load = loadWindow(id, channelCount);
    // Samples, not averages: so many go into one window.
    const mostS = MOST_SAMPLES / rateHz;
    const read = async (span: Span) => source.merge(await load(span, MOST_SAMPLES, controller.signal), span);
    let busy = false;
    /** What did not come over the line is read from the book, once it is sure to be there. */
    const fillHoles = () => {
      if (busy || controller.signal.aborted) return;
      const hole = source.holes().find(({ toS }) => toS < source.newestS - BOOKED_AFTER_S);
      if (!hole) return;
      busy = true;
      void read({ fromS: Math.max(hole.fromS, hole.toS - mostS), toS: hole.toS }).then(
        () => { busy = false; },
        // Only the moving page misses it; tried again when the page is opened anew, the recording has it.
        () => undefined,
      );
    };
    const openFirst = async () => {
      for (let toS = openedAtS + BOOKED_AFTER_S; toS > Math.max(0, openedAtS - LIVE_PAGE_S); toS -= mostS) await read({ fromS: Math.max(0, toS - mostS), toS });
    };
    if (openedAtS > 0) void openFirst().catch(() => undefined);
    const stop = source.onChange(fillHoles);
    return () => {
      stop();
      controller.abort();
    };
  }, [player, id, channelCount, rateHz, openedAtS]);
  return player;
}

/** Puts a frame of the live socket into the source, when it is of this trial. */
export function takeFrame(frame: Uint8Array, trialId: TrialId, source: LiveSource): void {
  const parsed = liveSamples.safeParse(unpack(frame));
  if (!parsed.success || parsed.data.trial !== trialId) return;
  const { count, timesS, values } = parsed.data;
  const width = source.channels.names.length;
  if (timesS.byteLength !== count * 8 || values.byteLength !== count * width * 4) return;
  source.take(new Float64Array(aligned(timesS)), new Float32Array(aligned(values)));
}

/** Bytes of a frame lie where they came to lie; typed arrays want them at a multiple of their size. */
const aligned = (bytes: Uint8Array): ArrayBuffer => bytes.slice().buffer;

/** Flags and marks of a trial as they come; told anew for each trial. */
export function useLiveWords(trialId: TrialId) {
  const [words, setWords] = useState<{ trialId: TrialId; flags: readonly LiveFlag[]; marks: readonly Mark[] }>({ trialId, flags: [], marks: [] });
  const own = words.trialId === trialId ? words : { trialId, flags: [], marks: [] };
  const onMessage = (message: LiveFromServer) => {
    if (message.type !== 'flags' && message.type !== 'mark') return;
    if (message.trialId !== trialId) return;
    setWords((before) => {
      const kept = before.trialId === trialId ? before : { trialId, flags: [], marks: [] };
      if (message.type === 'mark') return { ...kept, marks: [...kept.marks, { atS: message.atS, label: message.label }] };
      return { ...kept, flags: message.flags.map((flag) => ({ ...flag, id: `${flag.kind} ${flag.cable} ${flag.startS}` })) };
    });
  };
  return { ...own, onMessage };
}

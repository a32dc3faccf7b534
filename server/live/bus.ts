/**
 * What happens in this process, told to whoever watches: the recorder and the features tell, the rooms listen.
 *
 * Telling never waits: a listener that throws or is slow must not reach the teller. Samples are told as the chunk that
 * arrived, shared and not to be changed.
 */
import { EventEmitter } from 'node:events';
import type { DeviceId, NoteId, RecordingId, SessionId, StudyId, TrialId } from '@shared/api/common';
import type { TrialState } from '@shared/api/sessions';
import type { Flag } from '@shared/flags';
import type { Chunk } from '@shared/recording';

/** A flag of a running recording: `open` while it is still going on. */
export type LiveFlag = Omit<Flag, 'open'> & { open: boolean };

export interface BusEvents {
  device: { deviceId: DeviceId; state: 'connected' | 'recording' | 'gone' };
  /** A trial moved to another state; the recorder, the run page and the rooms all learn it here. */
  trial: { trialId: TrialId; sessionId: SessionId; state: TrialState };
  session: { sessionId: SessionId };
  samples: { trialId: TrialId; recordingId: RecordingId; channels: readonly string[]; rateHz: number; chunk: Chunk; arrivedUs: number };
  /** Every flag of the running recording so far: those ended and those still open. */
  liveFlags: { trialId: TrialId; flags: readonly LiveFlag[] };
  mark: { trialId: TrialId; atS: number; label: string };
  recordingClosed: { recordingId: RecordingId; trialId: TrialId | null };
  flagsFound: { recordingId: RecordingId; trialId: TrialId };
  note: { trialId: TrialId; noteId: NoteId };
  /** Somebody judged flags of this trial. */
  verdicts: { studyId: StudyId; trialId: TrialId };
}

export type BusEvent = keyof BusEvents;

export interface Bus {
  tell<E extends BusEvent>(event: E, payload: BusEvents[E]): void;
  /** Returns how to stop listening. */
  on<E extends BusEvent>(event: E, listener: (payload: BusEvents[E]) => void): () => void;
}

/** @param onFault gets what a listener threw. */
export function createBus(onFault: (error: unknown) => void): Bus {
  const emitter = new EventEmitter();
  emitter.setMaxListeners(0);
  return {
    tell(event, payload) {
      for (const listener of emitter.listeners(event)) {
        try {
          (listener as (value: typeof payload) => void)(payload);
        } catch (error) {
          onFault(error);
        }
      }
    },
    on(event, listener) {
      emitter.on(event, listener);
      return () => emitter.off(event, listener);
    },
  };
}

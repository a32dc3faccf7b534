/** Tells the sessions that a trial's recording is closed, until they have taken it in: the recording is the fact, the trial follows. */
import type { Logger } from 'pino';
import { recordingId as asRecordingId, trialId as asTrialId, type RecordingId, type TrialId } from '@shared/api/common';
import type { LinkOptions } from '@shared/link';
import type { Database } from '../db/engine';
import { faultText } from './fault-text';
import type { TrialBook } from './ports';
import { endedUntold } from './queries';

type Reason = Parameters<TrialBook['stopped']>[2];

export class EndsTold {
  private readonly timers = new Set<NodeJS.Timeout>();

  constructor(private readonly book: TrialBook, private readonly log: Logger, private readonly options: Pick<LinkOptions, 'retryMostMs'>) {}

  async tell(trial: TrialId, recording: RecordingId, reason: Reason): Promise<void> {
    try {
      await this.book.stopped(trial, recording, reason);
    } catch (error) {
      this.log.warn({ message: faultText(error) }, 'a trial could not be marked as stopped; trying again');
      const timer = setTimeout(() => {
        this.timers.delete(timer);
        void this.tell(trial, recording, reason);
      }, this.options.retryMostMs);
      this.timers.add(timer);
    }
  }

  /** After a start: what was closed and not told any more. */
  async catchUp(db: Database): Promise<void> {
    for (const { trialId, recordingId, endReason } of await endedUntold(db)) {
      await this.tell(asTrialId.parse(trialId), asRecordingId.parse(recordingId), endReason ?? 'lost');
    }
  }

  stop(): void {
    for (const timer of this.timers) clearTimeout(timer);
    this.timers.clear();
  }
}

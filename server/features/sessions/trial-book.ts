/** What the recorder asks of, and tells, the sessions. Every move is in the session's log under the device's name. */
import type { DeviceId } from '@shared/api/common';
import { sessionId, trialId, type TrialId } from '@shared/api/common';
import type { Database } from '../../db/engine';
import type { TrialBook } from '../../ingest/ports';
import type { Bus } from '../../live/bus';
import { holdSession, moveTrial, nameOfDevice, placeOfTrial, trialHeldBy, type TrialPlace } from './change-queries';
import { appendLog } from './log-queries';
import { type MoveName, moves } from './trial-states';

export function createTrialBook(db: Database, bus: Bus, now: () => Date = () => new Date()): TrialBook {
  /** A move that does not fit the trial's state changes nothing and is no error: the recorder may tell twice. */
  async function move(id: TrialId, name: MoveName, what: string, detail: Record<string, unknown> = {}): Promise<void> {
    const moved = await db.transaction(async (tx): Promise<TrialPlace | null> => {
      const trial = await placeOfTrial(tx, id);
      if (trial === null || (await holdSession(tx, trial.sessionId)) === null) return null;
      if (!(await moveTrial(tx, id, name))) return null;
      const who = trial.deviceId === null ? 'device' : await nameOfDevice(tx, trial.deviceId);
      await appendLog(tx, trial.sessionId, { at: now(), who, what, detail: { trial: trial.number, ...(trial.deviceId ? { deviceId: trial.deviceId } : {}), ...detail } });
      return trial;
    });
    if (moved) bus.tell('trial', { trialId: id, sessionId: sessionId.parse(moved.sessionId), state: moves[name].to });
  }

  return {
    async mayBegin(deviceId: DeviceId, id) {
      const trial = await placeOfTrial(db, id);
      if (trial === null) return 'unknown';
      return trial.state === 'armed' && trial.deviceId === deviceId ? 'yes' : 'not-armed';
    },
    async armedOn(deviceId) {
      const id = await trialHeldBy(db, deviceId, ['armed']);
      return id === null ? null : trialId.parse(id);
    },
    began: (id, recordingId) => move(id, 'begin', 'recording began', { recordingId }),
    away: (id) => move(id, 'loseLink', 'device lost'),
    back: (id) => move(id, 'regainLink', 'device back'),
    stopped: (id, recordingId, reason) => move(id, 'end', 'recording ended', { recordingId, reason }),
  };
}

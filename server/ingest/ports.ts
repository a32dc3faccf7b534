/**
 * The two doors between the recorder and the sessions.
 *
 * `DeviceControl` is what the session pages ask of devices; `TrialBook` is what the recorder asks of, and tells, the
 * sessions. Neither side knows the other's tables.
 */
import type { DeviceId, RecordingId, TrialId } from '@shared/api/common';

export type DeviceState = 'gone' | 'connected' | 'recording';

export interface DeviceControl {
  stateOf(deviceId: DeviceId): DeviceState;
  /** Rig revision that the connected device said it has; null when it is gone. */
  rigOf(deviceId: DeviceId): { code: string; revision: number } | null;
  /** Sends `arm`; `gone` when no such device is connected, `busy` while it records. */
  arm(deviceId: DeviceId, trialId: TrialId): 'sent' | 'gone' | 'busy';
  disarm(deviceId: DeviceId, trialId: TrialId): void;
  /** Sends `stop` for the run that records this trial; `gone` when its device is away. */
  stop(trialId: TrialId): 'sent' | 'gone' | 'not-recording';
  /** A revoked device is cut off at once with fault KEY_REVOKED. */
  revoke(deviceId: DeviceId): void;
}

export interface TrialBook {
  /** May this device begin this trial now? */
  mayBegin(deviceId: DeviceId, trialId: TrialId): Promise<'yes' | 'unknown' | 'not-armed'>;
  /** Trial that is armed on a device, so that a device coming back learns it again. */
  armedOn(deviceId: DeviceId): Promise<TrialId | null>;
  began(trialId: TrialId, recordingId: RecordingId): Promise<void>;
  away(trialId: TrialId): Promise<void>;
  back(trialId: TrialId): Promise<void>;
  stopped(trialId: TrialId, recordingId: RecordingId, reason: 'done' | 'stopped' | 'fault' | 'lost'): Promise<void>;
}

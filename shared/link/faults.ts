/**
 * Every way in which the device link says no, in one table.
 *
 * A code is public and never used for anything else. `fatal` says whether the server closes the connection after it;
 * the close code is 4000 plus the code's own number. A fault that is not fatal refuses one frame and leaves the run as it
 * was; too many of them in a row with nothing good between close the connection as well (option `faultsInARow`). No
 * fault ever discards what is durable.
 */
export const faultCodes = [
  'LINK_VERSION', 'KEY_UNKNOWN', 'KEY_REVOKED', 'DEVICE_BUSY', 'RIG_UNKNOWN', 'RIG_MISMATCH', 'CHANNELS', 'FRAME_TOO_LARGE', 'MALFORMED',
  'BATCH_ORDER', 'BATCH_SIZE', 'NOT_FINITE', 'RUN_UNKNOWN', 'RUN_CLOSED', 'TRIAL_UNKNOWN', 'TRIAL_NOT_ARMED', 'RATE', 'STORAGE',
] as const;
export type FaultCode = (typeof faultCodes)[number];

export interface FaultKind {
  readonly code: FaultCode;
  readonly fatal: boolean;
  /** WebSocket close code when the connection is closed because of it: 4000 + a number of its own. */
  readonly closeCode: number;
  /** What is wrong, for a person who builds a device. */
  readonly sentence: string;
  /** What the device or its builder does about it. */
  readonly wayOut: string;
  /** Status of the refused upgrade, for the codes that are known before the socket opens. */
  readonly status?: 401 | 403 | 409 | 426;
}

const kind = (code: FaultCode, number: number, fatal: boolean, sentence: string, wayOut: string, status?: FaultKind['status']): FaultKind =>
  status === undefined ? { code, fatal, closeCode: 4000 + number, sentence, wayOut } : { code, fatal, closeCode: 4000 + number, sentence, wayOut, status };

export const faultKinds: Readonly<Record<FaultCode, FaultKind>> = {
  LINK_VERSION: kind('LINK_VERSION', 1, true, 'This server speaks version 1 of the device link.', 'Ask for the subprotocol tautbook.link.v1 and say link: 1 in hello.', 426),
  KEY_UNKNOWN: kind('KEY_UNKNOWN', 2, true, 'No device has this key.', 'Send the key that was shown when the device was registered, as Authorization: Bearer <key>.', 401),
  KEY_REVOKED: kind('KEY_REVOKED', 3, true, 'This device’s key was revoked.', 'Ask an administrator to register the device again.', 403),
  DEVICE_BUSY: kind('DEVICE_BUSY', 4, true, 'This device is already connected and its other connection answers.', 'Close the other connection, or wait until it is gone.', 409),
  RIG_UNKNOWN: kind('RIG_UNKNOWN', 5, true, 'This rig revision is not in the lab’s book.', 'Import the rig file, or say the code and revision that the rig page shows.'),
  RIG_MISMATCH: kind('RIG_MISMATCH', 6, true, 'This device is registered for another rig.', 'Say the rig that the device was registered for, or register it for this one.'),
  CHANNELS: kind('CHANNELS', 7, true, 'The channels do not fit the rig or the naming of recordings.', 'Name pose, grasp, and one tension and one length for each cable, in the order of a recording file without its time.'),
  FRAME_TOO_LARGE: kind('FRAME_TOO_LARGE', 8, true, 'The frame is larger than the limit that welcome told.', 'Send fewer samples in a batch.'),
  MALFORMED: kind('MALFORMED', 9, false, 'The frame is not a message of this link.', 'Send one MessagePack map without extension types, with the fields of the message’s type.'),
  BATCH_ORDER: kind('BATCH_ORDER', 10, false, 'The batch is not the one that is wanted next.', 'Send again from batch n.'),
  BATCH_SIZE: kind('BATCH_SIZE', 11, false, 'The counts of the batch do not agree with its data or with the limits.', 'Send count x channels float32 values, at most batchSamples samples.'),
  NOT_FINITE: kind('NOT_FINITE', 12, false, 'The batch holds an infinite value.', 'Send NaN for a value that was not measured.'),
  RUN_UNKNOWN: kind('RUN_UNKNOWN', 13, false, 'This device never began this run.', 'Send begin first.'),
  RUN_CLOSED: kind('RUN_CLOSED', 14, false, 'This run is closed; its recording never changes again.', 'Forget the run, and begin another one.'),
  TRIAL_UNKNOWN: kind('TRIAL_UNKNOWN', 15, false, 'There is no such trial.', 'Begin the trial of the last arm message, or null.'),
  TRIAL_NOT_ARMED: kind('TRIAL_NOT_ARMED', 16, false, 'This trial is not armed on this device.', 'Wait for arm, or begin null and have the run filed later.'),
  RATE: kind('RATE', 17, true, 'The rate is outside what the server takes, or the sample times do not rise.', 'Say a rate within the limits, and give every sample a later time than the one before.'),
  STORAGE: kind('STORAGE', 18, false, 'The server cannot store at the moment.', 'Keep what is not acknowledged; acknowledgements go on when storage is back.'),
};

export const closeCodeOf = (code: FaultCode): number => faultKinds[code].closeCode;

/** The fault that a close code stands for; undefined for codes that are not of this link. */
export function faultOfCloseCode(closeCode: number): FaultKind | undefined {
  return faultCodes.map((code) => faultKinds[code]).find((entry) => entry.closeCode === closeCode);
}

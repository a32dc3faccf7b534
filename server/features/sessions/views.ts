/** Rows as the contracts show them. Blind members get no condition labels. */
import {
  conditionId, deviceId, participantId, recordingId, rigRevisionId, sessionId, studyId, taskId, trialId,
} from '@shared/api/common';
import type { RecordingMeta, SessionSummary, TrialSummary } from '@shared/api/sessions';
import type { RecordingRow, SessionRow, TrialRow } from './queries';

const secondsOf = (us: number) => us / 1e6;

export const toSessionSummary = (row: SessionRow): SessionSummary => ({
  ...row,
  id: sessionId.parse(row.id),
  studyId: studyId.parse(row.studyId),
  participantId: participantId.parse(row.participantId),
  rigRevisionId: rigRevisionId.parse(row.rigRevisionId),
  plannedAt: row.plannedAt.toISOString(),
});

export const toTrialSummary = (row: TrialRow, blind: boolean): TrialSummary => ({
  id: trialId.parse(row.id),
  number: row.number,
  state: row.state,
  outcome: row.outcome,
  outcomeReason: row.outcomeReason,
  task: { ...row.task, id: taskId.parse(row.task.id) },
  condition: { id: conditionId.parse(row.condition.id), blindCode: row.condition.blindCode, label: blind ? null : row.condition.label },
  durationS: row.lastUs === null ? null : secondsOf(row.lastUs),
  flags: row.flags,
  notes: row.notes,
  deviceId: row.deviceId === null ? null : deviceId.parse(row.deviceId),
  deviceName: row.deviceName,
});

export const toRecordingMeta = (row: RecordingRow): RecordingMeta => ({
  id: recordingId.parse(row.id),
  state: row.state,
  rateHz: row.rateHz,
  channels: row.channels,
  samples: row.samples,
  durationS: secondsOf(row.lastUs),
  gaps: row.gaps,
  marks: row.marks,
  digest: row.digest,
  endReason: row.endReason,
  startedAt: row.startedAt.toISOString(),
  startUncertaintyUs: row.startUncertaintyUs,
  rigRevisionId: rigRevisionId.parse(row.rigRevisionId),
  deviceName: row.deviceName ?? `file ${row.run}`,
});

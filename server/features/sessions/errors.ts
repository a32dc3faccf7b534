import { defineRefusals } from '../../http';

export const refuse = defineRefusals({
  SESSION_UNKNOWN: { status: 404, sentence: 'There is no such session.', wayOut: 'Go back to the study’s sessions.' },
  SESSION_CLOSED: { status: 409, sentence: 'This session is closed; its trials stay as they are.', wayOut: 'Plan a new session for further trials.' },
  SESSION_RUNNING: { status: 409, sentence: 'A trial of this session is armed or being recorded.', wayOut: 'Stop or disarm it first.' },
  SESSION_UNJUDGED: { status: 409, sentence: '{count} recorded trials of this session have no outcome yet.', wayOut: 'Give each its outcome, then close the session.' },
  STUDY_CLOSED: { status: 409, sentence: 'The study is {state}; no sessions are planned in it.', wayOut: 'Ask its lead to set it to running.' },
  PARTICIPANT_UNKNOWN: { status: 422, sentence: 'The study has no such participant.', wayOut: 'Choose one of the study’s participants.' },
  RIG_REVISION_UNKNOWN: { status: 422, sentence: 'There is no such revision of a rig.', wayOut: 'Choose one of the lab’s rigs.' },
  TASK_UNKNOWN: { status: 422, sentence: 'The study has no such task.', wayOut: 'Choose one of the study’s tasks.' },
  CONDITION_UNKNOWN: { status: 422, sentence: 'The study has no such condition.', wayOut: 'Choose one of the study’s conditions.' },
  PLAN_TIME: { status: 422, sentence: 'Sessions are planned between the years 2000 and 2200.', wayOut: 'Correct the date.' },
  TRIAL_UNKNOWN: { status: 404, sentence: 'There is no such trial, or it was taken out of its session.', wayOut: 'Go back to the session.' },
  TRIAL_STATE: { status: 409, sentence: 'The trial is {state}, so this cannot be done with it now.', wayOut: 'Reload the session to see where it stands.' },
  OUTCOME_REASON: { status: 422, sentence: 'An aborted or void trial needs a reason.', wayOut: 'Write in a few words what happened.' },
  DEVICE_UNKNOWN: { status: 422, sentence: 'There is no such device, or its key is revoked.', wayOut: 'Choose a device of the lab.' },
  DEVICE_AWAY: { status: 409, sentence: 'The device {device} is not connected.', wayOut: 'Switch it on, or check its network and key, and try again.' },
  DEVICE_BUSY: { status: 409, sentence: 'The device {device} is recording.', wayOut: 'Wait until that trial ends, or stop it.' },
  DEVICE_ARMED: { status: 409, sentence: 'Another trial is armed on the device {device}.', wayOut: 'Begin or disarm that trial first.' },
  RIG_MISMATCH: { status: 409, sentence: 'The session is planned on {planned}, but the device {device} says it is {found}.', wayOut: 'Use another device, or plan the session on the rig revision that is really there.' },
});

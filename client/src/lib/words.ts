/** The words of the book for roles and states; one word, one meaning, on every page. */
import type { LabRole, StudyRole } from '@shared/api/common';
import type { FlagKind, Outcome, TrialState } from '@shared/api/sessions';

export const ROLE_WORDS: Readonly<Record<LabRole, string>> = {
  administrator: 'administrator',
  lead: 'experiment lead',
  operator: 'operator',
  clinician: 'clinician',
};

export const STUDY_ROLE_WORDS: Readonly<Record<StudyRole, string>> = {
  lead: 'lead',
  operator: 'operator',
  clinician: 'clinician',
  reader: 'reader',
};

export const OUTCOME_WORDS: Readonly<Record<Outcome, string>> = { completed: 'completed', aborted: 'aborted', void: 'void' };

export const TRIAL_STATE_WORDS: Readonly<Record<TrialState, string>> = {
  planned: 'planned',
  armed: 'armed',
  recording: 'recording',
  away: 'device away',
  stopped: 'needs an outcome',
  judged: 'judged',
};

export const FLAG_WORDS: Readonly<Record<FlagKind, string>> = {
  slack: 'Slack',
  saturation: 'Saturated',
  'near-limit': 'Near the limit',
  gap: 'Gap',
  slip: 'Slip',
  oscillation: 'Oscillation',
  unreachable: 'Unreachable',
  active: 'Active',
  drop: 'Drop',
};

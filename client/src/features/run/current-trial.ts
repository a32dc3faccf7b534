import type { TrialSummary } from '@shared/api/sessions';

const UNDER_WAY: readonly TrialSummary['state'][] = ['armed', 'recording', 'away'];

export const isUnderWay = (trial: Pick<TrialSummary, 'state'>): boolean => UNDER_WAY.includes(trial.state);

/**
 * The trial that the desk is about: the one under way; else the one that the operator turned to; else the first that waits
 * for its outcome; else the next planned one.
 *
 * @returns null when every trial has its outcome
 */
export function currentTrial<T extends Pick<TrialSummary, 'id' | 'state'>>(trials: readonly T[], chosenId: string | null): T | null {
  const chosen = trials.find((trial) => trial.id === chosenId && trial.state !== 'judged');
  return trials.find(isUnderWay) ?? chosen ?? trials.find((trial) => trial.state === 'stopped') ?? trials.find((trial) => trial.state === 'planned') ?? null;
}

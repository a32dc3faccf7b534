import { Link } from 'react-router-dom';
import type { Session, TrialSummary } from '@shared/api/sessions';
import { OUTCOME_WORDS, TRIAL_STATE_WORDS } from '../../lib/words';
import { StateWord, type StateTone } from '../../ui/StateWord';

const SESSION_WORDS: Readonly<Record<Session['state'], { word: string; tone: StateTone }>> = {
  planned: { word: 'planned', tone: 'plain' },
  open: { word: 'open', tone: 'live' },
  closed: { word: 'closed', tone: 'plain' },
  signed: { word: 'signed', tone: 'good' },
};

export function SessionStateWord({ state }: { state: Session['state'] }) {
  const { word, tone } = SESSION_WORDS[state];
  return <StateWord tone={tone}>{word}</StateWord>;
}

const TRIAL_TONES: Readonly<Record<TrialSummary['state'], StateTone>> = {
  planned: 'plain', armed: 'live', recording: 'live', away: 'attention', stopped: 'waiting', judged: 'plain',
};

/** The outcome once there is one, else where the trial stands. */
export function TrialStateWord({ trial }: { trial: Pick<TrialSummary, 'state' | 'outcome'> }) {
  if (trial.outcome !== null) return <StateWord>{OUTCOME_WORDS[trial.outcome]}</StateWord>;
  return <StateWord tone={TRIAL_TONES[trial.state]}>{TRIAL_STATE_WORDS[trial.state]}</StateWord>;
}

/** Members who are blind see the code alone. */
export const conditionName = (condition: TrialSummary['condition']): string => condition.label ?? `condition ${condition.blindCode}`;

export const hasRecording = (trial: Pick<TrialSummary, 'state'>): boolean => trial.state !== 'planned' && trial.state !== 'armed';

/** Number and task; a link to the replay once something was recorded. */
export function TrialName({ trial }: { trial: TrialSummary }) {
  const name = `Trial ${trial.number}, ${trial.task.title}`;
  if (!hasRecording(trial)) return <span className="font-semibold">{name}</span>;
  return <Link to={`/trials/${trial.id}`} className="font-semibold hover:underline underline-offset-4">{name}</Link>;
}

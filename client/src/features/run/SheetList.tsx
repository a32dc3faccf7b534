import { Link } from 'react-router-dom';
import type { TrialId } from '@shared/api/common';
import type { Session, TrialSummary } from '@shared/api/sessions';
import { duration } from '../../lib/format';
import { classNames } from '../../ui/class-names';
import { conditionName, TrialStateWord } from '../sessions';
import { isUnderWay } from './current-trial';

interface SheetListProps {
  readonly session: Session;
  readonly current: TrialSummary | null;
  readonly onTurnTo: (trialId: TrialId) => void;
}

/** The run sheet in short: where the session stands; another trial can be turned to while none is under way. */
export function SheetList({ session, current, onTurnTo }: SheetListProps) {
  const busy = current !== null && isUnderWay(current);
  if (session.trials.length === 0) return null;
  return (
    <section aria-label="Run sheet" className="mt-7">
      <div className="flex items-baseline justify-between gap-4">
        <h3 className="text-body font-bold">Run sheet</h3>
        <Link to={`/sessions/${session.id}`} className="link text-small">add trials, change outcomes</Link>
      </div>
      <ol className="border-t border-rule mt-1">
        {session.trials.map((trial) => {
          const here = trial.id === current?.id;
          const waits = trial.state === 'planned' || trial.state === 'stopped';
          return (
            <li key={trial.id} aria-current={here ? 'step' : undefined} className={classNames('grid grid-cols-[2rem_minmax(0,1fr)_auto] gap-x-2 items-baseline border-b border-rule py-1.5 pr-2', here && 'bg-wash')}>
              <span className="text-small text-soft text-right pr-1">{trial.number}</span>
              <span className="min-w-0">
                {waits && !here && !busy ? (
                  <button type="button" onClick={() => onTurnTo(trial.id)} className="text-left underline decoration-rule-field decoration-1 underline-offset-4 hover:decoration-ink">{trial.task.title}</button>
                ) : trial.state === 'judged' ? <Link to={`/trials/${trial.id}`} className="underline decoration-rule-field decoration-1 underline-offset-4 hover:decoration-ink">{trial.task.title}</Link> : <span className={classNames(here && 'font-semibold')}>{trial.task.title}</span>}
                <span className="text-small text-soft"> {conditionName(trial.condition)}{trial.durationS === null || isUnderWay(trial) ? '' : `, ${duration(trial.durationS)}`}</span>
              </span>
              <TrialStateWord trial={trial} />
            </li>
          );
        })}
      </ol>
    </section>
  );
}

/** The right page while a session runs: what to do now, what was found so far, and the run sheet. */
import type { RigId, TrialId } from '@shared/api/common';
import type { Session, TrialSummary } from '@shared/api/sessions';
import type { RoomState } from '../../lib/live';
import { ButtonLink } from '../../ui/Button';
import { conditionName, OutcomeForm } from '../sessions';
import { ArmTrial } from './ArmTrial';
import { ArmedTrial } from './ArmedTrial';
import type { LiveFlag, LivePlayer, Mark } from './live-trial';
import { RunningTrial } from './RunningTrial';
import { SheetList } from './SheetList';

export interface DeskProps {
  readonly session: Session;
  readonly rigId: RigId;
  readonly current: TrialSummary | null;
  readonly onTurnTo: (trialId: TrialId | null) => void;
  readonly flags: readonly LiveFlag[];
  readonly marks: readonly Mark[];
  readonly link: RoomState;
  readonly player: LivePlayer | null;
}

export function Desk({ session, rigId, current, onTurnTo, flags, marks, link, player }: DeskProps) {
  return (
    <>
      {link === 'broken' ? <p role="status" className="mt-2 border-l-4 border-attention pl-3 text-small"><b>The live line to the server is down</b> and is being tried again. The recording does not depend on this page.</p> : null}
      {current ? (
        <section aria-label="Now" className="mt-3">
          <h2 className="text-heading font-bold">Trial {current.number} <span className="font-normal text-soft">of {session.trialsPlanned}</span></h2>
          <p className="text-soft">{current.task.title}, {conditionName(current.condition)}{current.task.timeLimitS === null ? '' : `, at most ${current.task.timeLimitS}\u00a0s`}</p>
          <div className="mt-3" key={`${current.id} ${current.state}`}>
            <Step rigId={rigId} trial={current} onTurnTo={onTurnTo} flags={flags} marks={marks} player={player} />
          </div>
        </section>
      ) : (
        <section aria-label="Now" className="mt-3">
          <h2 className="text-heading font-bold">{session.trials.length === 0 ? 'No trial on the sheet' : 'Every trial has its outcome'}</h2>
          <p className="text-soft">{session.trials.length === 0 ? 'Add one on the session’s page.' : 'Add a further trial or close the session on its page.'}</p>
          <div className="mt-3"><ButtonLink tone="main" to={`/sessions/${session.id}`}>To the session</ButtonLink></div>
        </section>
      )}
      <SheetList session={session} current={current} onTurnTo={onTurnTo} />
    </>
  );
}

function Step({ rigId, trial, onTurnTo, flags, marks, player }: Pick<DeskProps, 'rigId' | 'onTurnTo' | 'flags' | 'marks' | 'player'> & { trial: TrialSummary }) {
  switch (trial.state) {
    case 'planned':
      return <ArmTrial trial={trial} rigId={rigId} />;
    case 'armed':
      return <ArmedTrial trial={trial} />;
    case 'recording':
    case 'away':
      return <RunningTrial trial={trial} flags={flags} marks={marks} player={player} />;
    case 'stopped':
      return (
        <>
          <p role="status" className="mb-2">Recorded. <ButtonLink tone="quiet" to={`/trials/${trial.id}`}>Replay it</ButtonLink></p>
          <OutcomeForm trial={trial} onKept={() => onTurnTo(null)} onCancel={null} short />
        </>
      );
    case 'judged':
      return null;
  }
}

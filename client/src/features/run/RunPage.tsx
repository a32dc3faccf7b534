/** Where an operator runs a session: arm, watch, stop, judge, next. */
import { useQuery, useQueryClient, useSuspenseQuery } from '@tanstack/react-query';
import { useMemo, useState } from 'react';
import { Link, useParams } from 'react-router-dom';
import { sessionId as sessionIdSchema, type TrialId } from '@shared/api/common';
import type { RigRevision } from '@shared/api/rigs';
import type { RecordingMeta, Session, TrialSummary } from '@shared/api/sessions';
import { rigModel } from '@shared/rig/rig-model';
import { visitWords } from '../../lib/format';
import { idFromPath } from '../../lib/id-from-path';
import { useRoom } from '../../lib/live';
import { useMyRoleIn } from '../../lib/me';
import { Crumbs } from '../../ui/bar-slots';
import { ButtonLink } from '../../ui/Button';
import { Empty } from '../../ui/Empty';
import { Page, PageTitle, Section } from '../../ui/Page';
import { RigScene } from '../../replay/LazyScene';
import { rigRevisionQuery } from '../rigs';
import { sessionQuery } from '../sessions';
import { trialQuery } from '../trial';
import { currentTrial } from './current-trial';
import { Desk } from './Desk';
import { takeFrame, useLivePlayer, useLiveWords } from './live-trial';
import { LiveScene } from './LiveScene';
import { LiveStave, StaveAtRest } from './LiveStave';

export function RunPage() {
  const sessionId = idFromPath(sessionIdSchema, useParams()['sessionId']);
  const session = useSuspenseQuery(sessionQuery(sessionId)).data;
  const revision = useSuspenseQuery(rigRevisionQuery(session.rigRevisionId)).data;
  const role = useMyRoleIn(session.studyId)?.role;
  const visit = visitWords(session.visit);
  const title = `Running ${session.participantCode}, ${visit}`;
  const crumbs = (
    <Crumbs
      steps={[{ to: `/studies/${session.studyId}`, name: session.studyTitle }, { to: `/sessions/${session.id}`, name: `${session.participantCode}, ${visit}` }]}
      here="Running"
    />
  );
  if (role !== 'operator' && role !== 'lead') {
    return <Refused title={title}>{crumbs}<Empty title="Sessions are run by operators and leads of the study" action={<ButtonLink to={`/sessions/${session.id}`}>To the session</ButtonLink>}>You can read what they record.</Empty></Refused>;
  }
  if (session.state === 'closed' || session.state === 'signed') {
    return <Refused title={title}>{crumbs}<Empty title={`This session is ${session.state}`} action={<ButtonLink to={`/sessions/${session.id}`}>To the session</ButtonLink>}>Plan a new session to record further trials.</Empty></Refused>;
  }
  return <>{crumbs}<Running session={session} revision={revision} title={title} /></>;
}

function Refused({ title, children }: { title: string; children: React.ReactNode }) {
  return <Page title={title}><Section>{children}</Section></Page>;
}

function Running({ session, revision, title }: { session: Session; revision: RigRevision; title: string }) {
  const [chosenId, setChosenId] = useState<TrialId | null>(null);
  const current = currentTrial(session.trials, chosenId);
  // Once the outcome is given, the page keeps showing what was recorded until the next trial begins.
  const [shownId, setShownId] = useState<TrialId | null>(current?.id ?? null);
  if (current && current.id !== shownId && (current.state === 'recording' || current.state === 'away' || current.state === 'stopped')) setShownId(current.id);
  const shown = session.trials.find((trial) => trial.id === shownId) ?? current;
  const recording = useQuery({ ...trialQuery(shown?.id as TrialId), enabled: shown !== null && shown !== undefined && shown.state !== 'planned' && shown.state !== 'armed' }).data?.recording ?? null;

  const turnTo = (trialId: TrialId | null) => {
    setChosenId(trialId);
    if (trialId) setShownId(trialId);
  };
  const desk = (words: Words) => <Desk session={session} rigId={revision.rigId} current={current} onTurnTo={turnTo} {...words} />;
  return shown && recording && recording.rigRevisionId === revision.id
    ? <RunningSpread key={recording.id} trial={shown} recording={recording} session={session} revision={revision} title={title} desk={desk} />
    : <RestingSpread session={session} revision={revision} title={title} desk={desk} />;
}

/** What the desk is told about the trial that is shown. */
type Words = Pick<React.ComponentProps<typeof Desk>, 'flags' | 'marks' | 'link' | 'player'>;

function useSessionRoom(session: Session, onMessage: ReturnType<typeof useLiveWords>['onMessage'], onBytes?: (frame: Uint8Array) => void) {
  const queries = useQueryClient();
  return useRoom(`session:${session.id}`, (message) => {
    onMessage(message);
    if (message.type === 'trial' || message.type === 'session' || message.type === 'found') {
      void queries.invalidateQueries({ queryKey: ['session', session.id] });
      void queries.invalidateQueries({ queryKey: ['trial'] });
    }
    if (message.type === 'joined') void queries.invalidateQueries({ queryKey: ['session', session.id] });
  }, onBytes);
}

interface SpreadProps {
  readonly session: Session;
  readonly revision: RigRevision;
  readonly title: string;
  readonly desk: (words: Words) => React.ReactNode;
}

/** Before the first sample: the rig at home, an empty stave. */
function RestingSpread({ session, revision, title, desk }: SpreadProps) {
  const link = useSessionRoom(session, () => undefined);
  return (
    <SpreadFrame
      title={title}
      scene={<RigScene file={revision.file} />}
      desk={desk({ flags: [], marks: [], link, player: null })}
      stave={<StaveAtRest cables={revision.cableCount} />}
    />
  );
}

function RunningSpread({ trial, recording, session, revision, title, desk }: SpreadProps & { trial: TrialSummary; recording: RecordingMeta }) {
  const rig = useMemo(() => rigModel(revision.file), [revision]);
  const player = useLivePlayer(recording, revision.cableCount);
  const words = useLiveWords(trial.id);
  const link = useSessionRoom(session, words.onMessage, (frame) => {
    if (player) takeFrame(frame, trial.id, player.source);
  });
  if (!player) {
    return (
      <SpreadFrame
        title={title}
        scene={<p className="p-6 text-soft">The channels of this recording do not fit the {revision.cableCount} cables of the rig; it cannot be drawn. What the device sends is recorded all the same.</p>}
        desk={desk({ flags: words.flags, marks: words.marks, link, player: null })}
        stave={<StaveAtRest cables={revision.cableCount} />}
      />
    );
  }
  return (
    <SpreadFrame
      title={title}
      scene={<LiveScene revision={revision} rig={rig} player={player} />}
      desk={desk({ flags: words.flags, marks: words.marks, link, player })}
      stave={<LiveStave player={player} rig={rig} flags={words.flags} number={trial.number} />}
    />
  );
}

function SpreadFrame({ title, scene, desk, stave }: { title: string; scene: React.ReactNode; desk: React.ReactNode; stave: React.ReactNode }) {
  return (
    <div className="flex flex-col md:h-[calc(100dvh-3.3125rem)] md:min-h-[44rem]">
      <title>{`${title} · Tautbook`}</title>
      <div className="flex flex-col md:flex-1 md:min-h-0 md:grid md:grid-cols-[minmax(0,58fr)_minmax(0,42fr)]">
        <section aria-label="Scene" className="relative bg-sheet h-[19rem] md:h-auto min-h-0 overflow-hidden max-md:order-2">{scene}</section>
        <section aria-label="Desk" className="margin-rule min-h-0 md:overflow-y-auto px-6 max-sm:px-5 pt-3 pb-6">
          <div className="[&_h1]:text-lead [&_h1]:tracking-normal"><PageTitle>{title}</PageTitle></div>
          {desk}
          <p className="mt-6 text-small text-soft border-t border-rule pt-2 max-w-[46rem]">
            A research record, not a safety system: this page shows the rig late and can fail. Emergency stops and force limits belong to the rig, to local rules and to the licensed people in charge. <Link to="/rigs" className="link">Rigs of the lab</Link>
          </p>
        </section>
      </div>
      <section aria-label="Stave" className="sticky bottom-0 z-10 bg-paper border-t border-rule-strong">{stave}</section>
    </div>
  );
}

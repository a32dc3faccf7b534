import { useQueryClient, useSuspenseQuery } from '@tanstack/react-query';
import { useState } from 'react';
import { Link, useParams } from 'react-router-dom';
import { sessionId as sessionIdSchema } from '@shared/api/common';
import type { Session } from '@shared/api/sessions';
import { counted, visitWords, wallTime } from '../../lib/format';
import { useRoom } from '../../lib/live';
import { useMyRoleIn } from '../../lib/me';
import { Crumbs } from '../../ui/bar-slots';
import { Button, ButtonLink } from '../../ui/Button';
import { Caution } from '../../ui/Caution';
import { ConfirmDialog } from '../../ui/ConfirmDialog';
import { Page, Section } from '../../ui/Page';
import { idFromPath } from '../../lib/id-from-path';
import { sessionQuery, useCloseSession } from './queries';
import { RunSheet } from './RunSheet';
import { SessionStateWord } from './TrialWords';

export function SessionPage() {
  const sessionId = idFromPath(sessionIdSchema, useParams()['sessionId']);
  const queries = useQueryClient();
  const session = useSuspenseQuery(sessionQuery(sessionId)).data;
  const link = useRoom(`session:${sessionId}`, (message) => {
    if (message.type === 'trial' || message.type === 'session' || message.type === 'found') void queries.invalidateQueries({ queryKey: ['session', sessionId] });
  });
  const role = useMyRoleIn(session.studyId)?.role;
  const runs = role === 'lead' || role === 'operator';
  const running = session.state === 'planned' || session.state === 'open';
  const visit = visitWords(session.visit);

  return (
    <Page
      title={`Participant ${session.participantCode}, ${visit}`}
      heading={<>Participant <span className="whitespace-nowrap">{session.participantCode},</span> {visit}</>}
      lead={`${session.studyTitle} · ${session.rigTitle}, revision ${session.rigRevision} · planned for ${wallTime(session.plannedAt)}`}
      margin={<SessionStateWord state={session.state} />}
      actions={(
        <>
          {runs && running ? <ButtonLink tone="main" to={`/sessions/${sessionId}/run`}>Run the session</ButtonLink> : null}
          {runs ? <ButtonLink to={`/sessions/${sessionId}/log`}>Log</ButtonLink> : null}
          {runs && session.state === 'open' ? <CloseSession session={session} /> : null}
        </>
      )}
    >
      <Crumbs steps={[{ to: '/studies', name: 'Studies' }, { to: `/studies/${session.studyId}`, name: session.studyTitle }]} here={`${session.participantCode}, ${visit}`} />
      <RunSheet session={session} runs={runs && session.state !== 'signed'} removes={role === 'lead' && session.state !== 'signed'} />
      {link === 'broken' ? <Section><p role="status" className="text-small text-soft">The live line to the server is down and is being tried again; this page may lag behind.</p></Section> : null}
      <Section>
        <Caution>What a flag says about a moment is for people to judge; it stops nothing and protects nobody.</Caution>
      </Section>
    </Page>
  );
}

function CloseSession({ session }: { session: Session }) {
  const [open, setOpen] = useState(false);
  const close = useCloseSession(session.id);
  const unjudged = session.trials.filter((trial) => trial.state === 'stopped').length;
  const unrecorded = session.trials.filter((trial) => trial.state === 'planned').length;
  return (
    <>
      <Button onClick={() => setOpen(true)}>Close</Button>
      <ConfirmDialog
        open={open}
        onOpenChange={setOpen}
        title="Close this session"
        confirm="Close the session"
        busy={close.isPending}
        error={close.error}
        onConfirm={() => close.mutate(undefined, { onSuccess: () => setOpen(false) })}
      >
        <p>After that no trial can be recorded in it. Notes and outcomes stay open.</p>
        {unrecorded > 0 ? <p className="mt-1">{counted(unrecorded, 'planned trial')} will stay without a recording.</p> : null}
        {unjudged > 0 ? <p className="mt-1">{counted(unjudged, 'recorded trial')} without an outcome: give it on <Link to="#run-sheet" onClick={() => setOpen(false)} className="link">the run sheet</Link> first.</p> : null}
      </ConfirmDialog>
    </>
  );
}

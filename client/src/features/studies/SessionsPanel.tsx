import { useSuspenseQuery } from '@tanstack/react-query';
import type { Study } from '@shared/api/studies';
import { ButtonLink } from '../../ui/Button';
import { Empty } from '../../ui/Empty';
import { SessionTable, studySessionsQuery } from '../sessions';

export function SessionsPanel({ study, plans }: { study: Study; plans: boolean }) {
  const sessions = useSuspenseQuery(studySessionsQuery(study.id)).data;
  if (sessions.length > 0) return <SessionTable caption="Sessions of this study" sessions={sessions} />;
  return (
    <Empty title="No session has been planned" action={plans ? <ButtonLink to={`/studies/${study.id}/sessions/new`}>Plan a session</ButtonLink> : null}>
      {plans ? 'A session is one visit of one participant on one rig. Plan it with its trials, then run it.' : 'The lead or an operator of this study plans sessions.'}
    </Empty>
  );
}

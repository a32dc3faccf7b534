import { useSuspenseQuery } from '@tanstack/react-query';
import { useParams } from 'react-router-dom';
import { studyId as studyIdSchema } from '@shared/api/common';
import type { StudyRole } from '@shared/api/common';
import type { Study } from '@shared/api/studies';
import { counted, duration, wallDay } from '../../lib/format';
import { idFromPath } from '../../lib/id-from-path';
import { Crumbs } from '../../ui/bar-slots';
import { ButtonLink } from '../../ui/Button';
import { Page, Section } from '../../ui/Page';
import { PanelBoundary } from '../../ui/PanelBoundary';
import { RuledTable } from '../../ui/RuledTable';
import { StateWord } from '../../ui/StateWord';
import { MembersPanel } from './MembersPanel';
import { ParticipantsPanel } from './ParticipantsPanel';
import { ProtocolPanel } from './ProtocolPanel';
import { studyQuery } from './queries';
import { SessionsPanel } from './SessionsPanel';
import { STUDY_STATES } from './study-words';
import { StudyStateMenu } from './StudyStateMenu';

const HERE_AS: Readonly<Record<StudyRole, string>> = { lead: 'its lead', operator: 'an operator of it', clinician: 'a clinician of it', reader: 'a reader of it' };

export function StudyPage() {
  const studyId = idFromPath(studyIdSchema, useParams()['studyId']);
  const study = useSuspenseQuery(studyQuery(studyId)).data;
  const leads = study.myRole === 'lead';
  const plans = (leads || study.myRole === 'operator') && (study.state === 'draft' || study.state === 'running');
  return (
    <Page
      title={study.title}
      lead={`${study.code} · started ${wallDay(study.createdAt)} · you are ${HERE_AS[study.myRole]}${study.blind ? ', blind to conditions' : ''}`}
      margin={<StateWord tone={STUDY_STATES[study.state].tone}>{STUDY_STATES[study.state].word}</StateWord>}
      actions={(
        <>
          {plans ? <ButtonLink tone="main" to={`/studies/${studyId}/sessions/new`}>Plan a session</ButtonLink> : null}
          {study.myRole === 'clinician' ? null : <ButtonLink to={`/studies/${studyId}/moments`}>Moments</ButtonLink>}
          {leads ? <StudyStateMenu study={study} /> : null}
        </>
      )}
    >
      <Crumbs steps={[{ to: '/studies', name: 'Studies' }]} here={study.title} />
      {study.myRole === 'clinician' ? null : (
        <>
          <Section title="Sessions" note={counted(study.recordedTrials, 'trial recorded', 'trials recorded')}>
            <PanelBoundary><SessionsPanel study={study} plans={plans} /></PanelBoundary>
          </Section>
          <PanelBoundary sections><ParticipantsPanel study={study} adds={plans} /></PanelBoundary>
        </>
      )}
      <ProtocolPanel study={study} edits={leads} />
      <ConditionsAndTasks study={study} />
      <MembersPanel study={study} edits={leads} />
    </Page>
  );
}

function ConditionsAndTasks({ study }: { study: Study }) {
  return (
    <>
      <Section narrow title="Conditions" note={study.blind ? 'you see codes alone' : undefined}>
        <RuledTable
          caption="Conditions"
          rows={study.conditions}
          rowKey={(row) => row.id}
          columns={[
            { key: 'code', head: 'Blind code', width: '9rem', cell: (row) => <span className="font-semibold">{row.blindCode}</span> },
            { key: 'label', head: 'Label', plain: true, cell: (row) => row.label ?? <span className="text-soft">hidden from you</span> },
          ]}
        />
      </Section>
      <Section narrow title="Tasks">
        <RuledTable
          caption="Tasks"
          rows={study.tasks}
          rowKey={(row) => row.id}
          columns={[
            { key: 'code', head: 'Code', width: '9rem', cell: (row) => <span className="font-semibold">{row.code}</span> },
            { key: 'title', head: 'Task', plain: true, cell: (row) => row.title },
            { key: 'limit', head: 'Time limit', width: '9rem', align: 'right', cell: (row) => (row.timeLimitS === null ? 'none' : duration(row.timeLimitS)) },
          ]}
        />
      </Section>
    </>
  );
}

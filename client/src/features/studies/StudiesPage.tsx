import { useSuspenseQuery } from '@tanstack/react-query';
import { Link } from 'react-router-dom';
import type { StudySummary } from '@shared/api/studies';
import { count, counted } from '../../lib/format';
import { useMe } from '../../lib/me';
import { STUDY_ROLE_WORDS } from '../../lib/words';
import { ButtonLink } from '../../ui/Button';
import { Empty } from '../../ui/Empty';
import { Page, Section } from '../../ui/Page';
import { PanelBoundary } from '../../ui/PanelBoundary';
import { RuledTable, type RuledColumn } from '../../ui/RuledTable';
import { StateWord } from '../../ui/StateWord';
import { LabStudies } from './LabStudies';
import { studiesQuery } from './queries';
import { STUDY_STATES } from './study-words';

const columns: RuledColumn<StudySummary>[] = [
  {
    key: 'study',
    head: 'Study',
    lead: true,
    cell: (row) => (
      <>
        <Link to={`/studies/${row.id}`} className="font-semibold hover:underline underline-offset-4">{row.title}</Link>
        <span className="block text-small text-soft">{row.code}</span>
      </>
    ),
  },
  { key: 'role', head: 'You are', width: '9rem', cell: (row) => STUDY_ROLE_WORDS[row.myRole] },
  { key: 'participants', head: 'Participants', width: '8rem', align: 'right', cell: (row) => count(row.participants) },
  { key: 'sessions', head: 'Sessions', width: '7rem', align: 'right', cell: (row) => count(row.sessions) },
  { key: 'trials', head: 'Trials recorded', width: '9rem', align: 'right', cell: (row) => count(row.recordedTrials) },
  { key: 'state', head: 'State', plain: true, width: '7rem', align: 'right', cell: (row) => <StateWord tone={STUDY_STATES[row.state].tone}>{STUDY_STATES[row.state].word}</StateWord> },
];

export function StudiesPage() {
  const me = useMe();
  const studies = useSuspenseQuery(studiesQuery).data;
  const starts = me.role === 'lead';
  return (
    <Page title="Studies" lead="The studies you are a member of" margin={studies.length > 0 ? counted(studies.length, 'study', 'studies') : undefined} actions={starts && studies.length > 0 ? <ButtonLink tone="main" to="/studies/new">Start a study</ButtonLink> : null}>
      <Section>
        {studies.length === 0 ? (
          <Empty title="You are not a member of any study" action={starts ? <ButtonLink tone="main" to="/studies/new">Start a study</ButtonLink> : null}>
            {starts ? 'Start one: its protocol, conditions and tasks; then add members and participants.' : me.role === 'administrator' ? 'You see below which studies the lab has. Reading one needs membership; adding yourself is allowed and stands in the audit trail.' : 'A study’s lead can add you.'}
          </Empty>
        ) : <RuledTable caption="Studies" columns={columns} rows={studies} rowKey={(row) => row.id} />}
      </Section>
      {me.role === 'administrator' ? (
        <Section title="All studies of the lab" note="codes and titles only">
          <PanelBoundary><LabStudies /></PanelBoundary>
        </Section>
      ) : null}
    </Page>
  );
}

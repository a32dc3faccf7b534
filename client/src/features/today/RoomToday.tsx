import { useSuspenseQuery } from '@tanstack/react-query';
import { useState } from 'react';
import { Link } from 'react-router-dom';
import type { z } from 'zod';
import type { listToday, TrialSummary } from '@shared/api/sessions';
import { count, duration, visitWords } from '../../lib/format';
import { useMe } from '../../lib/me';
import { Button, ButtonLink } from '../../ui/Button';
import { Caution } from '../../ui/Caution';
import { Empty } from '../../ui/Empty';
import { Section } from '../../ui/Page';
import { RuledTable, type RuledColumn } from '../../ui/RuledTable';
import { OutcomeDialog, SessionTable, TrialName, TrialStateWord } from '../sessions';
import { todayQuery } from './queries';

type TodayTrial = z.infer<typeof listToday.response>['recent'][number];

const whose: RuledColumn<TodayTrial> = {
  key: 'session',
  head: 'Session',
  plain: true,
  width: '27rem',
  cell: (row) => (
    <>
      <Link to={`/sessions/${row.session.id}`} className="hover:underline underline-offset-4">{row.session.participantCode}, {visitWords(row.session.visit)}</Link>
      <span className="block text-small text-soft">{row.session.studyTitle}</span>
    </>
  ),
};
const name: RuledColumn<TodayTrial> = { key: 'trial', head: 'Trial', lead: true, cell: (row) => <TrialName trial={row} /> };
const length: RuledColumn<TodayTrial> = { key: 'length', head: 'Length', plain: true, width: '6rem', align: 'right', blank: (row) => row.durationS === null, cell: (row) => duration(row.durationS ?? Number.NaN) };
const flags: RuledColumn<TodayTrial> = { key: 'flags', head: 'Flags', width: '5rem', align: 'right', cell: (row) => count(row.flags) };
const notes: RuledColumn<TodayTrial> = { key: 'notes', head: 'Notes', width: '5rem', align: 'right', cell: (row) => count(row.notes) };
const state: RuledColumn<TodayTrial> = { key: 'state', head: 'Outcome', plain: true, width: '10rem', align: 'right', cell: (row) => <TrialStateWord trial={row} /> };

/** The lab room's day: sessions, recorded trials without an outcome, and the latest recordings to read again. */
export function RoomToday() {
  const me = useMe();
  const { sessions, toJudge, recent } = useSuspenseQuery(todayQuery).data;
  const [judging, setJudging] = useState<TrialSummary | null>(null);
  const runs = me.memberships.some((membership) => membership.role === 'lead' || membership.role === 'operator');
  const judge: RuledColumn<TodayTrial> = {
    key: 'do',
    head: 'To do',
    plain: true,
    width: '10rem',
    align: 'right',
    cell: (row) => <Button tone="quiet" about={`of trial ${row.number}, ${row.session.participantCode}`} onClick={() => setJudging(row)}>Give outcome</Button>,
  };
  return (
    <>
      <Section title="Sessions" note="planned or open">
        {sessions.length > 0 ? <SessionTable caption="Sessions planned or open" sessions={sessions} withStudy /> : (
          <Empty title="No session waits" action={<ButtonLink to="/studies">To your studies</ButtonLink>}>
            {me.memberships.length === 0 ? (me.role === 'lead' ? 'Start a study, or have its lead add you to one.' : 'You are not a member of any study yet; its lead can add you.') : 'Plan one from the page of its study.'}
          </Empty>
        )}
      </Section>
      {runs && toJudge.length > 0 ? (
        <Section title="Trials without an outcome" note="recorded, not judged">
          <RuledTable caption="Trials without an outcome" columns={[name, whose, length, flags, notes, judge]} rows={toJudge} rowKey={(row) => row.id} />
        </Section>
      ) : null}
      <Section title="Latest recordings" note="to read again">
        {recent.length > 0 ? <RuledTable caption="Latest recordings" columns={[name, whose, length, flags, notes, state]} rows={recent} rowKey={(row) => row.id} /> : (
          <Empty title="Nothing has been recorded yet">Run a session: the device streams, and each trial stands here a moment after it ends.</Empty>
        )}
      </Section>
      <Section><Caution>It shows what was; stopping the rig and keeping people safe stay in the room.</Caution></Section>
      {judging ? <OutcomeDialog trial={judging} onClose={() => setJudging(null)} /> : null}
    </>
  );
}

import { useQuery } from '@tanstack/react-query';
import { useState } from 'react';
import { getStudy } from '@shared/api/studies';
import type { Session, TrialSummary } from '@shared/api/sessions';
import { call } from '../../lib/api';
import { count, duration } from '../../lib/format';
import { Button } from '../../ui/Button';
import { Empty } from '../../ui/Empty';
import { Section } from '../../ui/Page';
import { RuledTable, type RuledColumn } from '../../ui/RuledTable';
import { AddTrialDialog } from './AddTrialDialog';
import { FileRecordingDialog } from './FileRecordingDialog';
import { OutcomeDialog } from './OutcomeDialog';
import { RemoveTrialDialog } from './RemoveTrialDialog';
import { conditionName, TrialName, TrialStateWord } from './TrialWords';

type Open = { what: 'outcome' | 'remove' | 'file'; trial: TrialSummary } | { what: 'add' } | null;

const unrecorded = (trial: TrialSummary) => trial.durationS === null;

/** The trials of a session in their order, each with where it stands and what can be done with it. */
interface RunSheetProps {
  session: Session;
  /** May give outcomes and add trials. */
  runs: boolean;
  removes: boolean;
}

export function RunSheet({ session, runs, removes }: RunSheetProps) {
  const [open, setOpen] = useState<Open>(null);
  const close = () => setOpen(null);
  const adds = runs && session.state !== 'closed';
  const study = useQuery({ queryKey: ['study', session.studyId], queryFn: ({ signal }) => call(getStudy, { params: { studyId: session.studyId }, signal }), enabled: adds }).data;
  const waiting = session.trials.filter((trial) => trial.state === 'stopped').length;

  const columns: RuledColumn<TrialSummary>[] = [
    { key: 'trial', head: 'Trial', lead: true, cell: (trial) => <TrialName trial={trial} /> },
    { key: 'condition', head: 'Condition', plain: true, width: '11rem', cell: (trial) => conditionName(trial.condition) },
    { key: 'length', head: 'Length', plain: true, width: '6rem', align: 'right', blank: unrecorded, cell: (trial) => duration(trial.durationS ?? Number.NaN) },
    { key: 'flags', head: 'Flags', width: '5rem', align: 'right', blank: unrecorded, cell: (trial) => count(trial.flags) },
    { key: 'notes', head: 'Notes', width: '5rem', align: 'right', blank: unrecorded, cell: (trial) => count(trial.notes) },
    {
      key: 'state',
      head: 'Outcome',
      plain: true,
      width: '13rem',
      cell: (trial) => (
        <>
          <TrialStateWord trial={trial} />
          {trial.outcomeReason ? <span className="block text-small text-soft">{trial.outcomeReason}</span> : null}
        </>
      ),
    },
    ...(runs ? [{
      key: 'do',
      head: 'To do',
      plain: true,
      width: '13rem',
      align: 'right' as const,
      cell: (trial: TrialSummary) => (
        <span className="inline-flex gap-x-4">
          {trial.state === 'stopped' || trial.state === 'judged' ? (
            <Button onClick={() => setOpen({ what: 'outcome', trial })} tone={trial.state === 'stopped' ? 'quiet' : 'faint'} about={`of trial ${trial.number}`}>
              {trial.state === 'stopped' ? 'Give outcome' : 'Change outcome'}
            </Button>
          ) : null}
          {adds && trial.state === 'planned' ? <Button tone="faint" onClick={() => setOpen({ what: 'file', trial })} about={`as trial ${trial.number}`}>File a recording</Button> : null}
          {removes && (trial.state === 'planned' || trial.state === 'stopped' || trial.state === 'judged') ? (
            <Button tone="faint" onClick={() => setOpen({ what: 'remove', trial })} about={`trial ${trial.number}`}>Take out</Button>
          ) : null}
        </span>
      ),
    }] : []),
  ];

  return (
    <Section
      id="run-sheet"
      title="Run sheet"
      note={waiting > 0 ? `${waiting} to judge` : `${session.trialsRecorded} of ${session.trialsPlanned} recorded`}
      actions={adds && study ? <Button tone="quiet" onClick={() => setOpen({ what: 'add' })}>Add a trial</Button> : null}
    >
      {session.trials.length === 0 ? (
        <Empty title="No trials on this sheet">{adds ? 'Add the first one, then run the session.' : 'This session was closed without a trial.'}</Empty>
      ) : (
        <RuledTable caption="Trials of this session" columns={columns} rows={session.trials} rowKey={(trial) => trial.id} marked={(trial) => trial.state === 'armed' || trial.state === 'recording' || trial.state === 'away'} />
      )}
      {open?.what === 'outcome' ? <OutcomeDialog trial={open.trial} onClose={close} /> : null}
      {open?.what === 'file' ? <FileRecordingDialog trial={open.trial} onClose={close} /> : null}
      {open?.what === 'remove' ? <RemoveTrialDialog trial={open.trial} onClose={close} /> : null}
      {open?.what === 'add' && study ? <AddTrialDialog sessionId={session.id} study={study} onClose={close} /> : null}
    </Section>
  );
}

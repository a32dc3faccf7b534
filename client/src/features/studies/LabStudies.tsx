import { useSuspenseQuery } from '@tanstack/react-query';
import { useState } from 'react';
import type { StudyId } from '@shared/api/common';
import { Button } from '../../ui/Button';
import { ConfirmDialog } from '../../ui/ConfirmDialog';
import { Empty } from '../../ui/Empty';
import { RuledTable } from '../../ui/RuledTable';
import { StateWord } from '../../ui/StateWord';
import { allStudiesQuery, useJoinStudy } from './queries';
import { STUDY_STATES } from './study-words';

/** What an administrator sees of studies they are no member of, and the way in. */
export function LabStudies() {
  const studies = useSuspenseQuery(allStudiesQuery).data;
  const [asked, setAsked] = useState<{ id: StudyId; title: string } | null>(null);
  const join = useJoinStudy();
  const close = () => {
    setAsked(null);
    join.reset();
  };
  if (studies.length === 0) return <Empty title="The lab has no study yet">An experiment lead starts one. Invite a lead under People, if there is none.</Empty>;
  return (
    <>
      <RuledTable
        caption="All studies of the lab"
        rows={studies}
        rowKey={(row) => row.id}
        columns={[
          { key: 'study', head: 'Study', lead: true, cell: (row) => <><span className="font-semibold">{row.title}</span><span className="block text-small text-soft">{row.code}</span></> },
          { key: 'state', head: 'State', plain: true, width: '7rem', cell: (row) => <StateWord tone={STUDY_STATES[row.state].tone}>{STUDY_STATES[row.state].word}</StateWord> },
          {
            key: 'member',
            head: 'Member',
            plain: true,
            width: '13rem',
            align: 'right',
            cell: (row) => (row.member ? <StateWord>you are a member</StateWord> : <Button tone="quiet" about={`of ${row.title}`} onClick={() => setAsked(row)}>Add yourself as a reader</Button>),
          },
        ]}
      />
      <ConfirmDialog
        open={asked !== null}
        onOpenChange={close}
        title={`Read along in ${asked?.title ?? ''}`}
        confirm="Add me as a reader"
        busy={join.isPending}
        error={join.error}
        onConfirm={() => {
          if (asked) join.mutate(asked.id, { onSuccess: close });
        }}
      >
        You will see its sessions, recordings and notes, and may write notes. The audit trail says that you added yourself.
      </ConfirmDialog>
    </>
  );
}

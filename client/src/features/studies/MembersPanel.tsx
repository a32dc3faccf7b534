import { useState } from 'react';
import type { Member, Study } from '@shared/api/studies';
import { counted } from '../../lib/format';
import { STUDY_ROLE_WORDS } from '../../lib/words';
import { Button } from '../../ui/Button';
import { ConfirmDialog } from '../../ui/ConfirmDialog';
import { Section } from '../../ui/Page';
import { RuledTable, type RuledColumn } from '../../ui/RuledTable';
import { MemberDialog } from './MemberDialog';
import { useRemoveMember } from './queries';

type Open = { what: 'add' } | { what: 'change' | 'remove'; member: Member } | null;

/** Who may see this study, as what; only its lead changes that. */
export function MembersPanel({ study, edits }: { study: Study; edits: boolean }) {
  const [open, setOpen] = useState<Open>(null);
  const remove = useRemoveMember(study.id);
  const close = () => {
    setOpen(null);
    remove.reset();
  };
  const columns: RuledColumn<Member>[] = [
    { key: 'name', head: 'Member', lead: true, cell: (row) => <span className="font-semibold">{row.name}</span> },
    { key: 'role', head: 'Role', plain: true, width: '9rem', cell: (row) => STUDY_ROLE_WORDS[row.role] },
    { key: 'blind', head: 'Conditions', width: '11rem', cell: (row) => (row.blind ? 'sees codes alone' : 'sees labels') },
    ...(edits ? [{
      key: 'do',
      head: 'To do',
      plain: true,
      width: '11rem',
      align: 'right' as const,
      cell: (row: Member) => (
        <span className="inline-flex gap-x-4">
          <Button tone="quiet" onClick={() => setOpen({ what: 'change', member: row })} about={row.name}>Change</Button>
          <Button tone="faint" onClick={() => setOpen({ what: 'remove', member: row })} about={row.name}>Take out</Button>
        </span>
      ),
    }] : []),
  ];
  return (
    <Section narrow title="Members" note={counted(study.members.length, 'person', 'people')} actions={edits ? <Button tone="quiet" onClick={() => setOpen({ what: 'add' })}>Add a member</Button> : null}>
      <RuledTable caption="Members of this study" columns={columns} rows={study.members} rowKey={(row) => row.personId} />
      {open?.what === 'add' ? <MemberDialog study={study} onClose={close} /> : null}
      {open?.what === 'change' ? <MemberDialog study={study} member={open.member} onClose={close} /> : null}
      <ConfirmDialog
        open={open?.what === 'remove'}
        onOpenChange={close}
        title={open?.what === 'remove' ? `Take ${open.member.name} out` : ''}
        confirm="Take out of the study"
        grave
        busy={remove.isPending}
        error={remove.error}
        onConfirm={() => {
          if (open?.what === 'remove') remove.mutate(open.member.personId, { onSuccess: close });
        }}
      >
        They no longer see this study. What they wrote stays, under their name.
      </ConfirmDialog>
    </Section>
  );
}

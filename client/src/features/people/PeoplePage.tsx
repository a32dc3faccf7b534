import { useSuspenseQuery } from '@tanstack/react-query';
import { useState } from 'react';
import type { Person } from '@shared/api/people';
import { counted, wallDay } from '../../lib/format';
import { useMe } from '../../lib/me';
import { ROLE_WORDS } from '../../lib/words';
import { Button } from '../../ui/Button';
import { ConfirmDialog } from '../../ui/ConfirmDialog';
import { Page, Section } from '../../ui/Page';
import { RuledTable, type RuledColumn } from '../../ui/RuledTable';
import { StateWord, type StateTone } from '../../ui/StateWord';
import { InviteDialog } from './InviteDialog';
import { peopleQuery, useChangePerson } from './queries';
import { RoleDialog } from './RoleDialog';

const STATES: Readonly<Record<Person['state'], { word: string; tone: StateTone }>> = {
  invited: { word: 'invited', tone: 'waiting' },
  active: { word: 'active', tone: 'plain' },
  closed: { word: 'access closed', tone: 'plain' },
};

type Open = { what: 'invite' } | { what: 'role' | 'close' | 'reopen'; person: Person } | null;

export function PeoplePage() {
  const me = useMe();
  const people = useSuspenseQuery(peopleQuery).data;
  const [open, setOpen] = useState<Open>(null);
  const change = useChangePerson();
  const done = () => {
    setOpen(null);
    change.reset();
  };
  const columns: RuledColumn<Person>[] = [
    { key: 'name', head: 'Person', lead: true, cell: (row) => <><span className="font-semibold">{row.name}</span>{row.id === me.id ? <span className="text-small text-soft"> you</span> : null}<span className="block text-small text-soft break-all">{row.email}</span></> },
    { key: 'role', head: 'Role in the lab', plain: true, width: '11rem', cell: (row) => ROLE_WORDS[row.role] },
    { key: 'since', head: 'Since', width: '9rem', cell: (row) => wallDay(row.createdAt) },
    { key: 'state', head: 'State', plain: true, width: '9rem', cell: (row) => <StateWord tone={STATES[row.state].tone}>{STATES[row.state].word}</StateWord> },
    {
      key: 'do',
      head: 'To do',
      plain: true,
      width: '14rem',
      align: 'right',
      cell: (row) => (row.id === me.id ? null : (
        <span className="inline-flex gap-x-4">
          <Button tone="quiet" onClick={() => setOpen({ what: 'role', person: row })} about={`of ${row.name}`}>Change role</Button>
          {row.state === 'closed'
            ? <Button tone="faint" onClick={() => setOpen({ what: 'reopen', person: row })} about={`for ${row.name}`}>Open again</Button>
            : <Button tone="faint" onClick={() => setOpen({ what: 'close', person: row })} about={`of ${row.name}`}>Close access</Button>}
        </span>
      )),
    },
  ];
  const asked = open?.what === 'close' || open?.what === 'reopen' ? open : null;
  return (
    <Page title="People" lead="Who belongs to the lab. What one may do in a study comes from its members list." margin={counted(people.length, 'person', 'people')} actions={<Button tone="main" onClick={() => setOpen({ what: 'invite' })}>Invite a person</Button>}>
      <Section><RuledTable caption="People of the lab" columns={columns} rows={people} rowKey={(row) => row.id} /></Section>
      {open?.what === 'invite' ? <InviteDialog onClose={done} /> : null}
      {open?.what === 'role' ? <RoleDialog person={open.person} onClose={done} /> : null}
      <ConfirmDialog
        open={asked !== null}
        onOpenChange={done}
        title={asked === null ? '' : asked.what === 'close' ? `Close the access of ${asked.person.name}` : `Open the access of ${asked.person.name} again`}
        confirm={asked?.what === 'reopen' ? 'Open the access' : 'Close the access'}
        grave={asked?.what === 'close'}
        busy={change.isPending}
        error={change.error}
        onConfirm={() => {
          if (asked) change.mutate({ personId: asked.person.id, closed: asked.what === 'close' }, { onSuccess: done });
        }}
      >
        {asked?.what === 'reopen' ? 'They can sign in again, with the memberships they had.' : 'They are signed out everywhere and cannot sign in. What they wrote stays, under their name.'}
      </ConfirmDialog>
    </Page>
  );
}

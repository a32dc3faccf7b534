import { useSuspenseQuery } from '@tanstack/react-query';
import { useParams } from 'react-router-dom';
import { sessionId as sessionIdSchema } from '@shared/api/common';
import type { LogEntry } from '@shared/api/sessions';
import { counted, visitWords, wallTimeToSecond } from '../../lib/format';
import { idFromPath } from '../../lib/id-from-path';
import { Crumbs } from '../../ui/bar-slots';
import { Button } from '../../ui/Button';
import { Caution } from '../../ui/Caution';
import { Details } from '../../ui/Details';
import { Empty } from '../../ui/Empty';
import { Page, Section } from '../../ui/Page';
import { RuledTable, type RuledColumn } from '../../ui/RuledTable';
import { StateWord } from '../../ui/StateWord';
import { sessionLogQuery, sessionQuery } from './queries';

const columns: RuledColumn<LogEntry>[] = [
  { key: 'n', head: 'No.', width: '3.5rem', cell: (entry) => <span className="text-soft">{entry.n}</span> },
  { key: 'at', head: 'Wall time', plain: true, width: '12rem', cell: (entry) => wallTimeToSecond(entry.at) },
  { key: 'who', head: 'Who', plain: true, width: '10rem', cell: (entry) => entry.who },
  {
    key: 'what',
    head: 'What',
    lead: true,
    cell: (entry) => (
      <>
        <span className="font-semibold">{entry.what}</span>
        <Details detail={entry.detail} omit={['personId', 'deviceId']} />
      </>
    ),
  },
  { key: 'hash', head: 'Link of the chain', width: '9rem', align: 'right', cell: (entry) => <span className="text-small text-soft" title={entry.hash}>{entry.hash.slice(0, 12)}…</span> },
];

/** Everything that happened to a session, in the order it happened; nothing here is ever changed. */
export function SessionLogPage() {
  const sessionId = idFromPath(sessionIdSchema, useParams()['sessionId']);
  const session = useSuspenseQuery(sessionQuery(sessionId)).data;
  const { entries, holds } = useSuspenseQuery({ ...sessionLogQuery(sessionId), staleTime: 0 }).data;
  const last = entries.at(-1);
  const visit = visitWords(session.visit);
  return (
    <Page
      title="Log of the session"
      tab={`Log, ${session.participantCode}, ${visit}`}
      lead={`Participant ${session.participantCode}, ${visit} · ${session.studyTitle} · ${session.rigTitle}, revision ${session.rigRevision}`}
      margin={counted(entries.length, 'entry', 'entries')}
      actions={<Button onClick={() => window.print()}>Print</Button>}
    >
      <Crumbs
        steps={[{ to: '/studies', name: 'Studies' }, { to: `/studies/${session.studyId}`, name: session.studyTitle }, { to: `/sessions/${sessionId}`, name: `${session.participantCode}, ${visit}` }]}
        here="Log"
      />
      <Section note="checked just now">
        {holds ? (
          <p><StateWord tone="good">The chain holds.</StateWord> <span className="text-small text-soft">Each entry carries the SHA-256 of the one before it; none was changed, added between or taken out.</span>{last ? <span className="block text-small text-soft break-all">Last link <span className="text-ink">{last.hash}</span></span> : null}</p>
        ) : (
          <div role="alert" className="border-l-4 border-attention pl-3">
            <p className="font-semibold">The chain is broken.</p>
            <p className="text-small text-soft">An entry does not fit the one before it: somebody changed the database outside this book. Keep a backup as it is now and tell the administrator.</p>
          </div>
        )}
      </Section>
      <Section>
        {entries.length === 0 ? <Empty title="Nothing written yet">The first entry comes with the first change of this session.</Empty> : <RuledTable caption="Log entries" columns={columns} rows={entries} rowKey={(entry) => String(entry.n)} />}
      </Section>
      <Section><Caution /></Section>
    </Page>
  );
}

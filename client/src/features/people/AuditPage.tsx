import { useSuspenseInfiniteQuery } from '@tanstack/react-query';
import type { z } from 'zod';
import { allRoutes } from '@shared/api';
import type { auditEntry } from '@shared/api/people';
import { wallTimeToSecond } from '../../lib/format';
import { Button } from '../../ui/Button';
import { Details } from '../../ui/Details';
import { Empty } from '../../ui/Empty';
import { Page, Section } from '../../ui/Page';
import { ProblemNote } from '../../ui/ProblemNote';
import { RuledTable, type RuledColumn } from '../../ui/RuledTable';
import { auditQuery } from './queries';

type AuditEntry = z.infer<typeof auditEntry>;

/** Actions that are no route of ours. */
const SIGN_IN_WORDS: Readonly<Record<string, string>> = { 'auth.signIn': 'Signed in', 'auth.passwordReset': 'Set a new password by mail' };

/** What a route does, as its contract says it, up to the first semicolon. */
const actionWords = (action: string): string =>
  SIGN_IN_WORDS[action] ?? allRoutes.find((route) => route.id === action)?.summary.split(/[;:]/)[0] ?? action;

/** The subject stands first, unless the details name it anyway or it is the person themselves. */
const subjectOnce = ({ action, subject, detail }: AuditEntry): Record<string, unknown> =>
  (action in SIGN_IN_WORDS || Object.values(detail).includes(subject) ? detail : { about: subject, ...detail });

const columns: RuledColumn<AuditEntry>[] = [
  { key: 'at', head: 'Wall time', plain: true, width: '13rem', cell: (row) => wallTimeToSecond(row.at) },
  { key: 'who', head: 'Who', plain: true, width: '12rem', cell: (row) => <span className="font-semibold">{row.who}</span> },
  { key: 'what', head: 'What', lead: true, cell: (row) => <><span>{actionWords(row.action)} <span className="text-small text-soft">{row.action}</span></span><Details detail={subjectOnce(row)} /></> },
];

export function AuditPage() {
  const audit = useSuspenseInfiniteQuery(auditQuery);
  const entries = audit.data.pages.flat();
  return (
    <Page title="Audit trail" lead="Every change by anyone, and every reading of a participant’s data by a clinician; newest first">
      <Section>
        {entries.length === 0 ? <Empty title="Nothing has happened yet">The first change writes the first entry.</Empty> : <RuledTable caption="Audit entries" columns={columns} rows={entries} rowKey={(row) => String(row.id)} />}
        <ProblemNote className="mt-4" error={audit.isFetchNextPageError ? audit.error : null} />
        {audit.hasNextPage ? <Button className="mt-5" busy={audit.isFetchingNextPage} onClick={() => void audit.fetchNextPage()}>Older entries</Button> : null}
      </Section>
    </Page>
  );
}

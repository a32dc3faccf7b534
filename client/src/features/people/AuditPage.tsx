import { useSuspenseInfiniteQuery } from '@tanstack/react-query';
import { Button } from '../../ui/Button';
import { Empty } from '../../ui/Empty';
import { Page, Section } from '../../ui/Page';
import { ProblemNote } from '../../ui/ProblemNote';
import { AuditTable } from './AuditTable';
import { auditQuery } from './queries';

export function AuditPage() {
  const audit = useSuspenseInfiniteQuery(auditQuery);
  const entries = audit.data.pages.flat();
  return (
    <Page title="Audit trail" lead="Every change by anyone, and every reading of a participant’s data by a clinician; newest first">
      <Section>
        {entries.length === 0 ? <Empty title="Nothing has happened yet">The first change writes the first entry.</Empty> : <AuditTable caption="Audit entries" entries={entries} />}
        <ProblemNote className="mt-4" error={audit.isFetchNextPageError ? audit.error : null} />
        {audit.hasNextPage ? <Button className="mt-5" busy={audit.isFetchingNextPage} onClick={() => void audit.fetchNextPage()}>Older entries</Button> : null}
      </Section>
    </Page>
  );
}

import { isRouteErrorResponse, useRouteError } from 'react-router-dom';
import { asProblem } from '../lib/api-problem';
import { Button, ButtonLink } from '../ui/Button';
import { Page, Section } from '../ui/Page';
import { ProblemNote } from '../ui/ProblemNote';
import { NotFoundPage } from './NotFoundPage';

/** What stands in place of a page that failed. */
export function PageError() {
  const error = useRouteError();
  if (isRouteErrorResponse(error) && error.status === 404) return <NotFoundPage />;
  if (asProblem(error).status === 404) return <NotFoundPage />;
  if (asProblem(error).status === 403) return <ClosedPage error={error} />;
  // A page's own code may be gone after the server was updated: loading again fetches the new one.
  return (
    <Page title="This page could not be opened" margin="out of order">
      <Section>
        <ProblemNote error={error} />
        <div className="mt-6 flex gap-3">
          <Button tone="main" onClick={() => window.location.reload()}>Load it again</Button>
          <ButtonLink to="/">To Today</ButtonLink>
        </div>
      </Section>
    </Page>
  );
}

/** A page that exists and is not for this reader's role: loading it again would not change that. */
function ClosedPage({ error }: { error: unknown }) {
  return (
    <Page title="This page is not open to you" margin="closed">
      <Section>
        <ProblemNote error={error} />
        <div className="mt-6 flex gap-3">
          <ButtonLink tone="main" to="/">To Today</ButtonLink>
          <ButtonLink to="/studies">To your studies</ButtonLink>
        </div>
      </Section>
    </Page>
  );
}

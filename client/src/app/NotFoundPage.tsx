import { ButtonLink } from '../ui/Button';
import { Page, Section } from '../ui/Page';

/** An address with no page, and a page the reader may not know of: the two read the same. */
export function NotFoundPage() {
  return (
    <Page title="No such page" margin="nothing here">
      <Section>
        <p className="max-w-[40rem]">
          The address may be mistyped, the page may have been taken out, or it belongs to a study or a session that is not open to you. A study’s lead can change that.
        </p>
        <div className="mt-6 flex gap-3">
          <ButtonLink tone="main" to="/">To Today</ButtonLink>
          <ButtonLink to="/studies">To your studies</ButtonLink>
        </div>
      </Section>
    </Page>
  );
}

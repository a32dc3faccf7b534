import { useMe } from '../../lib/me';
import { Caution } from '../../ui/Caution';
import { Empty } from '../../ui/Empty';
import { Section } from '../../ui/Page';

/** Clinicians read what was released to them; so far nothing can be, and the page says so. */
export function ClinicianToday() {
  const studies = useMe().memberships.filter((membership) => membership.role === 'clinician');
  return (
    <>
      <Section title="Summaries">
        <Empty title="No summary has been released to you">
          {studies.length === 0 ? 'You are not a member of any study yet; its lead can add you.' : `When the lead of ${studies.map((study) => study.studyTitle).join(' or ')} releases a session’s summary, it stands here, newest first.`}
        </Empty>
      </Section>
      <Section><Caution>Measures come from a research device; local rules and your judgement come first.</Caution></Section>
    </>
  );
}

import { useSuspenseQuery } from '@tanstack/react-query';
import { Link } from 'react-router-dom';
import { Caution } from '../../ui/Caution';
import { Empty } from '../../ui/Empty';
import { Section } from '../../ui/Page';
import { StateWord } from '../../ui/StateWord';
import { STUDY_STATES, studiesQuery } from '../studies';

/** Clinicians read what was released to them; so far nothing can be, and the page says so. */
export function ClinicianToday() {
  const studies = useSuspenseQuery(studiesQuery).data;
  return (
    <>
      <Section title="Summaries" note="released to you">
        <Empty title="No summary has been released to you">
          {studies.length === 0 ? 'You are not a member of any study yet; its lead can add you.' : 'A session’s summary stands here once the lead of its study releases it, newest first.'}
        </Empty>
      </Section>
      {studies.length === 0 ? null : (
        <Section title="Your studies" note="protocol, conditions, members">
          <ul className="border-t border-rule-strong max-w-[46rem]">
            {studies.map((study) => (
              <li key={study.id} className="border-b border-rule py-3 flex justify-between gap-x-5">
                <Link to={`/studies/${study.id}`} className="font-semibold hover:underline underline-offset-4">{study.title}</Link>
                <StateWord tone={STUDY_STATES[study.state].tone}>{STUDY_STATES[study.state].word}</StateWord>
              </li>
            ))}
          </ul>
        </Section>
      )}
      <Section><Caution>Measures come from a research device; local rules and your judgement come first.</Caution></Section>
    </>
  );
}

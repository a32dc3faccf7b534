import { useSuspenseQuery } from '@tanstack/react-query';
import { useParams } from 'react-router-dom';
import { trialId as trialIdSchema } from '@shared/api/common';
import type { Trial } from '@shared/api/sessions';
import { idFromPath } from '../../lib/id-from-path';
import { visitWords } from '../../lib/format';
import { Crumbs } from '../../ui/bar-slots';
import { ButtonLink } from '../../ui/Button';
import { Empty } from '../../ui/Empty';
import { Page, Section } from '../../ui/Page';
import { recordingSource } from '../../replay/recording-source';
import { rigRevisionQuery } from '../rigs';
import { trialQuery } from './queries';
import { TrialSpread } from './TrialSpread';

/** One trial as a spread: scene, margin, stave. */
export function TrialPage() {
  const trialId = idFromPath(trialIdSchema, useParams()['trialId']);
  const trial = useSuspenseQuery(trialQuery(trialId)).data;
  return (
    <>
      <TrialCrumbs trial={trial} />
      {trial.recording === null ? <NotRecorded trial={trial} /> : <Recorded key={trial.recording.id} trial={trial} recording={trial.recording} />}
    </>
  );
}

function Recorded({ trial, recording }: { trial: Trial; recording: NonNullable<Trial['recording']> }) {
  const revision = useSuspenseQuery(rigRevisionQuery(recording.rigRevisionId)).data;
  const fits = recordingSource(recording, revision.cableCount) !== null;
  if (!fits) {
    return (
      <Page title={titleOf(trial)}>
        <Section>
          <Empty title="This recording cannot be shown with its rig" action={<ButtonLink to={`/sessions/${trial.session.id}`}>Back to the session</ButtonLink>}>
            Its channels do not fit the {revision.cableCount} cables of {revision.title}, revision {revision.revision}. The samples are safe and can be exported as CSV.
          </Empty>
        </Section>
      </Page>
    );
  }
  return <TrialSpread trial={trial} recording={recording} revision={revision} title={titleOf(trial)} />;
}

function NotRecorded({ trial }: { trial: Trial }) {
  const armed = trial.state === 'armed';
  return (
    <Page title={titleOf(trial)}>
      <Section>
        <Empty
          title={armed ? 'This trial is armed and waits for its device' : 'Nothing was recorded for this trial yet'}
          action={<ButtonLink to={trial.may.run ? `/sessions/${trial.session.id}/run` : `/sessions/${trial.session.id}`}>{trial.may.run ? 'To the run sheet' : 'To the session'}</ButtonLink>}
        >
          The scene, the stave and the notes appear here once it is recorded.
        </Empty>
      </Section>
    </Page>
  );
}

export const titleOf = (trial: Trial): string => `Trial ${trial.number} of ${trial.trialsInSession}, ${trial.task.title}`;

function TrialCrumbs({ trial }: { trial: Trial }) {
  const { session } = trial;
  return (
    <Crumbs
      steps={[
        { to: `/studies/${session.studyId}`, name: session.studyTitle },
        { to: `/sessions/${session.id}`, name: `${session.participantCode}, ${visitWords(session.visit)}` },
      ]}
      here={`Trial ${trial.number} of ${trial.trialsInSession}`}
    />
  );
}

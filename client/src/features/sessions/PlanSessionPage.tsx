import { zodResolver } from '@hookform/resolvers/zod';
import { useSuspenseQueries } from '@tanstack/react-query';
import { useForm } from 'react-hook-form';
import { Link, useNavigate, useParams } from 'react-router-dom';
import { z } from 'zod';
import { conditionId, participantId, rigRevisionId, studyId as studyIdSchema, taskId } from '@shared/api/common';
import { counted } from '../../lib/format';
import { idFromPath } from '../../lib/id-from-path';
import { Crumbs } from '../../ui/bar-slots';
import { Button, ButtonLink } from '../../ui/Button';
import { Actions } from '../../ui/Dialog';
import { Empty } from '../../ui/Empty';
import { SelectField, TextField } from '../../ui/Field';
import { Page, Section } from '../../ui/Page';
import { ProblemNote } from '../../ui/ProblemNote';
import { rigsQuery } from '../rigs';
import { participantsQuery, studyQuery } from '../studies';
import { PlannedTrials } from './PlannedTrials';
import { usePlanSession } from './queries';

export const plan = z.object({
  participantId: z.string().min(1, 'Choose who comes').pipe(participantId),
  rigRevisionId: z.string().min(1, 'Choose the rig').pipe(rigRevisionId),
  /** Local wall time, as the browser's own field gives it. */
  plannedAt: z.string().min(1, 'Say when').refine((text) => !Number.isNaN(Date.parse(text)), 'This is no date'),
  trials: z.array(z.object({ taskId, conditionId })).max(200, 'At most 200 trials in one session'),
});
export type PlanInput = z.input<typeof plan>;
export type Plan = z.output<typeof plan>;

/** The next full quarter of an hour, in local time, as the field wants it. */
function nextQuarter(now = new Date()): string {
  const at = new Date(Math.ceil(now.getTime() / 900_000) * 900_000);
  return new Date(at.getTime() - at.getTimezoneOffset() * 60_000).toISOString().slice(0, 16);
}

export function PlanSessionPage() {
  const studyId = idFromPath(studyIdSchema, useParams()['studyId']);
  const navigate = useNavigate();
  const [{ data: study }, { data: participants }, { data: rigs }] = useSuspenseQueries({ queries: [studyQuery(studyId), participantsQuery(studyId), rigsQuery] });
  const save = usePlanSession(studyId);
  const form = useForm<PlanInput, unknown, Plan>({
    resolver: zodResolver(plan),
    defaultValues: { participantId: '', rigRevisionId: rigs.length === 1 ? rigs[0]?.latest ?? '' : '', plannedAt: nextQuarter(), trials: [] },
  });
  const { errors } = form.formState;
  const submit = form.handleSubmit((values) => save.mutate(
    { ...values, plannedAt: new Date(values.plannedAt).toISOString() },
    { onSuccess: (session) => navigate(`/sessions/${session.id}`) },
  ));
  return (
    <Page title="Plan a session" lead={`One visit of one participant on one rig · ${study.title}`}>
      <Crumbs steps={[{ to: '/studies', name: 'Studies' }, { to: `/studies/${studyId}`, name: study.title }]} here="Plan a session" />
      {participants.length === 0 ? (
        <Section><Empty title="This study has no participants yet" action={<ButtonLink tone="main" to={`/studies/${studyId}#participants`}>Add a participant</ButtonLink>}>A session is a visit of somebody: add their pseudonymous code first.</Empty></Section>
      ) : rigs.length === 0 ? (
        <Section><Empty title="No rig has been imported yet" action={<ButtonLink tone="main" to="/rigs/import">Import a rig file</ButtonLink>}>A recording points at the revision of the rig it was made on.</Empty></Section>
      ) : (
        <form noValidate onSubmit={submit}>
          <Section narrow title="Visit">
            <div className="grid gap-x-8 gap-y-4 sm:grid-cols-[11rem_1fr_14rem]">
              <SelectField label="Participant" error={errors.participantId?.message} help={<Link to={`/studies/${studyId}#participants`} className="link">Add one</Link>} {...form.register('participantId')}>
                <option value="">Choose</option>
                {participants.map((participant) => <option key={participant.id} value={participant.id}>{participant.code}, visit {participant.sessions + 1}</option>)}
              </SelectField>
              <SelectField label="Rig" help="Its newest revision, kept for ever." error={errors.rigRevisionId?.message} {...form.register('rigRevisionId')}>
                <option value="">Choose</option>
                {rigs.map((rig) => <option key={rig.id} value={rig.latest}>{rig.title}, revision {rig.revisions}</option>)}
              </SelectField>
              <TextField label="When" type="datetime-local" help="Wall time where you are." error={errors.plannedAt?.message} {...form.register('plannedAt')} />
            </div>
          </Section>
          <PlannedTrials form={form} study={study} />
          <Section>
            <ProblemNote error={save.error} />
            {save.isIdle && form.formState.isSubmitted && Object.keys(errors).length > 0 ? <p role="alert" className="text-small font-semibold text-attention-text">{counted(Object.keys(errors).length, 'field')} above still to fill in.</p> : null}
            <Actions>
              <Button tone="main" type="submit" busy={save.isPending}>Plan the session</Button>
              <ButtonLink tone="quiet" to={`/studies/${studyId}`}>Back to the study</ButtonLink>
            </Actions>
          </Section>
        </form>
      )}
    </Page>
  );
}

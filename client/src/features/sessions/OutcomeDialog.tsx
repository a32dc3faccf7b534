import { zodResolver } from '@hookform/resolvers/zod';
import { useForm } from 'react-hook-form';
import { z } from 'zod';
import { outcome, type Outcome, type TrialSummary } from '@shared/api/sessions';
import { OUTCOME_WORDS } from '../../lib/words';
import { Button } from '../../ui/Button';
import { Actions, Dialog } from '../../ui/Dialog';
import { TextArea } from '../../ui/Field';
import { ProblemNote } from '../../ui/ProblemNote';
import { useJudgeTrial } from './queries';

const judgement = z.object({ outcome, reason: z.string().trim().max(400) })
  .refine((value) => value.outcome === 'completed' || value.reason !== '', { path: ['reason'], message: 'Say why: others will ask' });
type Judgement = z.infer<typeof judgement>;

const MEANING: Readonly<Record<Outcome, string>> = {
  completed: 'The task was done as the protocol says.',
  aborted: 'It was begun and given up: by the participant, the operator or the time limit.',
  void: 'It does not count: wrong task, wrong condition, or the rig was not in order.',
};

interface OutcomeDialogProps {
  trial: TrialSummary;
  onClose: () => void;
}

/** Gives a recorded trial its outcome, or corrects it. */
export function OutcomeDialog({ trial, onClose }: OutcomeDialogProps) {
  const judge = useJudgeTrial(trial.id);
  const form = useForm<Judgement>({
    resolver: zodResolver(judgement),
    defaultValues: { outcome: trial.outcome ?? 'completed', reason: trial.outcomeReason ?? '' },
  });
  const chosen = form.watch('outcome');
  const { errors } = form.formState;
  return (
    <Dialog open onOpenChange={onClose} title={`Outcome of trial ${trial.number}`} description={`${trial.task.title}. The log keeps who gave which outcome and when.`}>
      <form noValidate onSubmit={form.handleSubmit((body) => judge.mutate(body, { onSuccess: onClose }))}>
        <fieldset className="border-t border-rule">
          <legend className="sr-only">Outcome</legend>
          {outcome.options.map((option) => (
            <label key={option} className="grid grid-cols-[auto_1fr] gap-x-3 border-b border-rule py-2 cursor-pointer">
              <input type="radio" value={option} className="size-4.5 mt-0.5 accent-ink" {...form.register('outcome')} />
              <span><span className="font-semibold">{OUTCOME_WORDS[option]}</span> <span className="block text-small text-soft">{MEANING[option]}</span></span>
            </label>
          ))}
        </fieldset>
        <div className="mt-4 grid gap-4">
          <TextArea label={chosen === 'completed' ? 'Remark, if any' : 'Reason'} rows={2} error={errors.reason?.message} {...form.register('reason')} />
          <ProblemNote error={judge.error} />
        </div>
        <Actions>
          <Button tone="main" type="submit" busy={judge.isPending}>Keep the outcome</Button>
          <Button tone="quiet" onClick={onClose}>Not now</Button>
        </Actions>
      </form>
    </Dialog>
  );
}

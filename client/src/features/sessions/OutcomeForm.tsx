import { zodResolver } from '@hookform/resolvers/zod';
import { useForm } from 'react-hook-form';
import { z } from 'zod';
import { outcome, type Outcome, type TrialSummary } from '@shared/api/sessions';
import { OUTCOME_WORDS } from '../../lib/words';
import { Button } from '../../ui/Button';
import { classNames } from '../../ui/class-names';
import { Actions } from '../../ui/Dialog';
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

interface OutcomeFormProps {
  trial: TrialSummary;
  onKept: () => void;
  /** Null where there is nothing to go back to. */
  onCancel: (() => void) | null;
  /** Side by side, with the meaning of the chosen one alone: where there is more to see on the page. */
  short?: boolean;
}

/** Which outcome a recorded trial has, and why. */
export function OutcomeForm({ trial, onKept, onCancel, short = false }: OutcomeFormProps) {
  const judge = useJudgeTrial(trial.id);
  const form = useForm<Judgement>({
    resolver: zodResolver(judgement),
    defaultValues: { outcome: trial.outcome ?? 'completed', reason: trial.outcomeReason ?? '' },
  });
  const chosen = form.watch('outcome');
  const { errors } = form.formState;
  return (
    <form noValidate onSubmit={form.handleSubmit((body) => judge.mutate(body, { onSuccess: onKept }))}>
      <fieldset className={short ? 'border-y border-rule py-2 flex flex-wrap gap-x-7' : 'border-t border-rule'}>
        <legend className="sr-only">Outcome</legend>
        {outcome.options.map((option) => (
          <label key={option} className={classNames('grid grid-cols-[auto_1fr] gap-x-3 cursor-pointer', !short && 'border-b border-rule py-2')}>
            <input type="radio" value={option} className="size-4.5 mt-0.5 accent-ink" {...form.register('outcome')} />
            <span><span className="font-semibold">{OUTCOME_WORDS[option]}</span> {short ? null : <span className="block text-small text-soft">{MEANING[option]}</span>}</span>
          </label>
        ))}
        {short ? <p className="basis-full text-small text-soft mt-1">{MEANING[chosen]}</p> : null}
      </fieldset>
      <div className="mt-4 grid gap-4">
        <TextArea label={chosen === 'completed' ? 'Remark, if any' : 'Reason'} rows={2} error={errors.reason?.message} {...form.register('reason')} />
        <ProblemNote error={judge.error} />
      </div>
      <Actions>
        <Button tone="main" type="submit" busy={judge.isPending}>Keep the outcome</Button>
        {onCancel ? <Button tone="quiet" onClick={onCancel}>Not now</Button> : null}
      </Actions>
    </form>
  );
}

import { zodResolver } from '@hookform/resolvers/zod';
import { useMutation, useQueryClient } from '@tanstack/react-query';
import { useForm } from 'react-hook-form';
import { z } from 'zod';
import type { StudyId, TrialId } from '@shared/api/common';
import { giveVerdicts } from '@shared/api/review';
import type { JudgedFlag } from '@shared/api/sessions';
import { verdictValue, type VerdictValue } from '@shared/api/verdict';
import { call } from '../../lib/api';
import { clock, wallTime } from '../../lib/format';
import { Button } from '../../ui/Button';
import { Actions, Dialog } from '../../ui/Dialog';
import { TextArea } from '../../ui/Field';
import { ProblemNote } from '../../ui/ProblemNote';
import { flagHead } from './flag-words';
import { flagsQuery } from './queries';

const MEANING: Readonly<Record<VerdictValue, string>> = {
  confirmed: 'It happened as the rules found it.',
  dismissed: 'It did not: a sensor, a threshold, something else.',
  unsure: 'It cannot be told from what is here.',
};
const judgement = z.object({ value: verdictValue, reason: z.string().trim().max(400, 'At most 400 characters') });

interface VerdictDialogProps {
  studyId: StudyId;
  trialId: TrialId;
  flag: JudgedFlag;
  myId: string;
  onClose: () => void;
}

/** Judges one flag where it is read. */
export function VerdictDialog({ studyId, trialId, flag, myId, onClose }: VerdictDialogProps) {
  const queries = useQueryClient();
  const stale = () => Promise.all([flagsQuery(trialId).queryKey, ['study', studyId, 'moments']].map((queryKey) => queries.invalidateQueries({ queryKey })));
  const give = useMutation({
    mutationFn: ({ value, reason }: { value: VerdictValue | 'withdrawn'; reason: string }) => call(giveVerdicts, { params: { studyId }, body: { verdicts: [{ flagId: flag.id, value, reason, seen: flag.seen }] } }),
    onSuccess: onClose,
    onSettled: stale,
  });
  const form = useForm<z.infer<typeof judgement>>({ resolver: zodResolver(judgement), defaultValues: { value: flag.verdict && flag.verdict.value !== 'withdrawn' ? flag.verdict.value : 'confirmed', reason: '' } });
  const { verdict } = flag;
  return (
    <Dialog
      open
      onOpenChange={onClose}
      title={`${flagHead(flag)} at ${clock(flag.startS, 1)}`}
      description={verdict ? `${verdict.by.name} judged it ${verdict.value}, ${wallTime(verdict.at)}${verdict.reason === '' ? '' : `: ${verdict.reason}`}` : 'Nobody has judged it yet. Every verdict stays in the record.'}
    >
      <form noValidate onSubmit={form.handleSubmit((body) => give.mutate(body))}>
        <fieldset className="border-t border-rule">
          <legend className="sr-only">Verdict</legend>
          {verdictValue.options.map((option) => (
            <label key={option} className="grid grid-cols-[auto_1fr] gap-x-3 border-b border-rule py-2 cursor-pointer">
              <input type="radio" value={option} className="size-4.5 mt-0.5 accent-ink" {...form.register('value')} />
              <span><span className="font-semibold">{option}</span> <span className="block text-small text-soft">{MEANING[option]}</span></span>
            </label>
          ))}
        </fieldset>
        <div className="mt-4 grid gap-4">
          <TextArea label="Reason" rows={2} error={form.formState.errors.reason?.message} {...form.register('reason')} />
          <ProblemNote error={give.error} />
        </div>
        <Actions>
          <Button tone="main" type="submit" busy={give.isPending}>Keep the verdict</Button>
          {verdict?.by.id === myId ? <Button busy={give.isPending} onClick={() => give.mutate({ value: 'withdrawn', reason: '' })}>Take mine back</Button> : null}
          <Button tone="quiet" onClick={onClose}>Not now</Button>
        </Actions>
      </form>
    </Dialog>
  );
}

import { zodResolver } from '@hookform/resolvers/zod';
import { useForm } from 'react-hook-form';
import type { z } from 'zod';
import type { SessionId } from '@shared/api/common';
import { addTrial } from '@shared/api/sessions';
import type { Study } from '@shared/api/studies';
import { Button } from '../../ui/Button';
import { Actions, Dialog } from '../../ui/Dialog';
import { SelectField } from '../../ui/Field';
import { ProblemNote } from '../../ui/ProblemNote';
import { useAddTrial } from './queries';
import { conditionName } from './TrialWords';

type Body = typeof addTrial.body;

interface AddTrialDialogProps {
  sessionId: SessionId;
  study: Study;
  onClose: () => void;
}

/** A trial that was not planned, at the end of the run sheet. */
export function AddTrialDialog({ sessionId, study, onClose }: AddTrialDialogProps) {
  const add = useAddTrial(sessionId);
  const form = useForm<z.input<Body>, unknown, z.output<Body>>({
    resolver: zodResolver(addTrial.body),
    defaultValues: { taskId: study.tasks[0]?.id ?? '', conditionId: study.conditions[0]?.id ?? '' },
  });
  const { errors } = form.formState;
  return (
    <Dialog open onOpenChange={onClose} title="Add a trial" description="It goes to the end of the run sheet; the log says that it was not planned.">
      <form noValidate onSubmit={form.handleSubmit((body) => add.mutate(body, { onSuccess: onClose }))}>
        <div className="grid gap-4">
          <SelectField label="Task" error={errors.taskId?.message} {...form.register('taskId')}>
            {study.tasks.map((task) => <option key={task.id} value={task.id}>{task.title}</option>)}
          </SelectField>
          <SelectField label="Condition" error={errors.conditionId?.message} {...form.register('conditionId')}>
            {study.conditions.map((condition) => <option key={condition.id} value={condition.id}>{conditionName(condition)}</option>)}
          </SelectField>
          <ProblemNote error={add.error} />
        </div>
        <Actions>
          <Button tone="main" type="submit" busy={add.isPending}>Add the trial</Button>
          <Button tone="quiet" onClick={onClose}>Not now</Button>
        </Actions>
      </form>
    </Dialog>
  );
}

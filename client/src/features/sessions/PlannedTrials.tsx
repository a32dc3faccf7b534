import { useState } from 'react';
import { useFieldArray, type UseFormReturn } from 'react-hook-form';
import type { Study } from '@shared/api/studies';
import { counted } from '../../lib/format';
import { Button } from '../../ui/Button';
import { Empty } from '../../ui/Empty';
import { SelectField, TextField } from '../../ui/Field';
import { Section } from '../../ui/Page';
import type { Plan, PlanInput } from './PlanSessionPage';
import { conditionName } from './TrialWords';

interface PlannedTrialsProps {
  form: UseFormReturn<PlanInput, unknown, Plan>;
  study: Study;
}

/** The order of trials of a session to come: filled by blocks, then moved, changed and taken out one by one. */
export function PlannedTrials({ form, study }: PlannedTrialsProps) {
  const rows = useFieldArray({ control: form.control, name: 'trials' });
  const [repeats, setRepeats] = useState('1');
  const block = study.tasks.flatMap((task) => study.conditions.map((condition) => ({ taskId: task.id as string, conditionId: condition.id as string })));
  const times = Math.min(Math.max(Math.trunc(Number(repeats)) || 1, 1), 20);
  const fill = () => rows.append(Array.from({ length: times }, () => block).flat(), { shouldFocus: false });
  const one = () => rows.append({ taskId: study.tasks[0]?.id ?? '', conditionId: study.conditions[0]?.id ?? '' });
  return (
    <Section narrow title="Trials" note={counted(rows.fields.length, 'trial')}>
      <div className="flex flex-wrap items-end gap-x-5 gap-y-3 mb-4">
        <TextField className="w-28" label="Times each" type="number" min={1} max={20} value={repeats} onChange={(event) => setRepeats(event.target.value)} />
        <Button onClick={fill}>Add every task under every condition ({block.length * times})</Button>
        <Button tone="quiet" className="mb-2" onClick={one}>Add one trial</Button>
        {rows.fields.length > 0 ? <Button tone="faint" className="mb-2" onClick={() => rows.replace([])}>Clear the sheet</Button> : null}
      </div>
      {rows.fields.length === 0 ? (
        <Empty title="An empty run sheet">Add trials now, or one by one while the session runs.</Empty>
      ) : (
        <ol className="border-t border-rule-strong">
          {rows.fields.map((field, index) => (
            <li key={field.id} className="border-b border-rule py-2 flex flex-wrap items-center gap-x-5 gap-y-2">
              <span className="w-6 text-right text-soft">{index + 1}</span>
              <SelectField className="flex-1 min-w-40" label={`Task of trial ${index + 1}`} labelHidden {...form.register(`trials.${index}.taskId`)}>
                {study.tasks.map((task) => <option key={task.id} value={task.id}>{task.title}</option>)}
              </SelectField>
              <SelectField className="flex-1 min-w-32" label={`Condition of trial ${index + 1}`} labelHidden {...form.register(`trials.${index}.conditionId`)}>
                {study.conditions.map((condition) => <option key={condition.id} value={condition.id}>{conditionName(condition)}</option>)}
              </SelectField>
              <span className="flex gap-x-4">
                <Button tone="faint" disabled={index === 0} onClick={() => rows.move(index, index - 1)} about={`with trial ${index + 1}`}>Up</Button>
                <Button tone="faint" disabled={index === rows.fields.length - 1} onClick={() => rows.move(index, index + 1)} about={`with trial ${index + 1}`}>Down</Button>
                <Button tone="faint" onClick={() => rows.remove(index)} about={`trial ${index + 1}`}>Take out</Button>
              </span>
            </li>
          ))}
        </ol>
      )}
      {form.formState.errors.trials?.message ? <p role="alert" className="mt-2 text-small font-semibold text-attention-text">{form.formState.errors.trials.message}</p> : null}
    </Section>
  );
}

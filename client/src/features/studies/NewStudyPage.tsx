import { zodResolver } from '@hookform/resolvers/zod';
import { useFieldArray, useForm } from 'react-hook-form';
import { useNavigate } from 'react-router-dom';
import type { z } from 'zod';
import { createStudy } from '@shared/api/studies';
import { useMe } from '../../lib/me';
import { Crumbs } from '../../ui/bar-slots';
import { Button, ButtonLink } from '../../ui/Button';
import { Actions } from '../../ui/Dialog';
import { Empty } from '../../ui/Empty';
import { TextArea, TextField } from '../../ui/Field';
import { Page, Section } from '../../ui/Page';
import { ProblemNote } from '../../ui/ProblemNote';
import { useCreateStudy } from './queries';

const body = createStudy.body;
type Input = z.input<typeof body>;
type Output = z.output<typeof body>;

/** The next blind code: A, B, … Z, then A1, B1. */
const letter = (index: number) => String.fromCharCode(65 + (index % 26)) + (index < 26 ? '' : String(Math.floor(index / 26)));

/** An empty field means no limit; the contract wants null for that. */
const limit = (value: unknown) => (value === '' || value === null || value === undefined ? null : Number(value));

export function NewStudyPage() {
  const me = useMe();
  return (
    <Page title="Start a study" lead="Its lead sets it up; members and participants come next">
      <Crumbs steps={[{ to: '/studies', name: 'Studies' }]} here="Start a study" />
      {me.role === 'lead' ? <NewStudyForm /> : (
        <Section><Empty title="Only experiment leads start studies" action={<ButtonLink to="/studies">To the studies</ButtonLink>}>An administrator gives that role under People.</Empty></Section>
      )}
    </Page>
  );
}

function NewStudyForm() {
  const navigate = useNavigate();
  const create = useCreateStudy();
  const form = useForm<Input, unknown, Output>({
    resolver: zodResolver(body),
    defaultValues: { code: '', title: '', protocol: '', conditions: [{ blindCode: 'A', label: '' }], tasks: [{ code: 'T1', title: '', timeLimitS: null }] },
  });
  const conditions = useFieldArray({ control: form.control, name: 'conditions' });
  const tasks = useFieldArray({ control: form.control, name: 'tasks' });
  const { errors } = form.formState;
  const submit = form.handleSubmit((values) => create.mutate(values, { onSuccess: (study) => navigate(`/studies/${study.id}`) }));
  return (
    <form noValidate onSubmit={submit}>
      <Section narrow title="What it is">
        <div className="grid gap-4">
          <div className="grid gap-x-8 gap-y-4 sm:grid-cols-[10rem_1fr]">
            <TextField label="Code" help="Short, like KESTREL." error={errors.code?.message} {...form.register('code')} />
            <TextField label="Title" error={errors.title?.message} {...form.register('title')} />
          </div>
          <TextArea label="Protocol" rows={8} help="What is asked of a participant and in which order, for whoever runs a session. It can be written later." error={errors.protocol?.message} {...form.register('protocol')} />
        </div>
      </Section>
      <Section narrow title="Conditions" note="blind members see the code alone" actions={<Button tone="quiet" onClick={() => conditions.append({ blindCode: letter(conditions.fields.length), label: '' })}>Add a condition</Button>}>
        <ul className="border-t border-rule-strong">
          {conditions.fields.map((field, index) => (
            <li key={field.id} className="border-b border-rule py-2.5 flex flex-wrap items-start gap-x-6 gap-y-2">
              <TextField className="w-24" label={<>Code<span className="sr-only"> of condition {index + 1}</span></>} error={errors.conditions?.[index]?.blindCode?.message} {...form.register(`conditions.${index}.blindCode`)} />
              <TextField className="flex-1 min-w-48" label={<>Label<span className="sr-only"> of condition {index + 1}</span></>} error={errors.conditions?.[index]?.label?.message} {...form.register(`conditions.${index}.label`)} />
              {conditions.fields.length > 1 ? <Button tone="faint" className="mt-7" onClick={() => conditions.remove(index)} about={`condition ${index + 1}`}>Take out</Button> : null}
            </li>
          ))}
        </ul>
      </Section>
      <Section narrow title="Tasks" actions={<Button tone="quiet" onClick={() => tasks.append({ code: `T${tasks.fields.length + 1}`, title: '', timeLimitS: null })}>Add a task</Button>}>
        <ul className="border-t border-rule-strong">
          {tasks.fields.map((field, index) => (
            <li key={field.id} className="border-b border-rule py-2.5 flex flex-wrap items-start gap-x-6 gap-y-2">
              <TextField className="w-24" label={<>Code<span className="sr-only"> of task {index + 1}</span></>} error={errors.tasks?.[index]?.code?.message} {...form.register(`tasks.${index}.code`)} />
              <TextField className="flex-1 min-w-48" label={<>Title<span className="sr-only"> of task {index + 1}</span></>} error={errors.tasks?.[index]?.title?.message} {...form.register(`tasks.${index}.title`)} />
              <TextField className="w-36" label={<>Time limit, s<span className="sr-only">, of task {index + 1}</span></>} inputMode="numeric" placeholder="none" error={errors.tasks?.[index]?.timeLimitS?.message} {...form.register(`tasks.${index}.timeLimitS`, { setValueAs: limit })} />
              {tasks.fields.length > 1 ? <Button tone="faint" className="mt-7" onClick={() => tasks.remove(index)} about={`task ${index + 1}`}>Take out</Button> : null}
            </li>
          ))}
        </ul>
      </Section>
      <Section>
        <ProblemNote error={create.error} />
        <Actions>
          <Button tone="main" type="submit" busy={create.isPending}>Start the study</Button>
          <ButtonLink tone="quiet" to="/studies">Not now</ButtonLink>
        </Actions>
      </Section>
    </form>
  );
}

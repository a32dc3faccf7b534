import { zodResolver } from '@hookform/resolvers/zod';
import { useState } from 'react';
import { useForm } from 'react-hook-form';
import { z } from 'zod';
import { line, passage } from '@shared/api/common';
import type { Study } from '@shared/api/studies';
import { Button } from '../../ui/Button';
import { Actions } from '../../ui/Dialog';
import { Empty } from '../../ui/Empty';
import { TextArea, TextField } from '../../ui/Field';
import { Section } from '../../ui/Page';
import { ProblemNote } from '../../ui/ProblemNote';
import { useChangeStudy } from './queries';

const text = z.object({ title: line(120), protocol: passage(20_000) });
type Text = z.infer<typeof text>;

export function ProtocolPanel({ study, edits }: { study: Study; edits: boolean }) {
  const [writing, setWriting] = useState(false);
  return (
    <Section narrow title="Protocol" actions={edits && !writing && study.protocol !== '' ? <Button tone="quiet" onClick={() => setWriting(true)}>Edit</Button> : null}>
      {writing ? <ProtocolForm study={study} onClose={() => setWriting(false)} /> : study.protocol === '' ? (
        <Empty title="The protocol has not been written" action={edits ? <Button onClick={() => setWriting(true)}>Write it</Button> : null}>What is asked of a participant, in which order, and what ends a trial.</Empty>
      ) : <p className="max-w-[46rem] whitespace-pre-line">{study.protocol}</p>}
    </Section>
  );
}

function ProtocolForm({ study, onClose }: { study: Study; onClose: () => void }) {
  const change = useChangeStudy(study.id);
  const form = useForm<Text>({ resolver: zodResolver(text), defaultValues: { title: study.title, protocol: study.protocol } });
  const { errors } = form.formState;
  return (
    <form noValidate className="max-w-[46rem]" onSubmit={form.handleSubmit((body) => change.mutate(body, { onSuccess: onClose }))}>
      <div className="grid gap-4">
        <TextField label="Title" error={errors.title?.message} {...form.register('title')} />
        <TextArea label="Protocol" rows={12} error={errors.protocol?.message} {...form.register('protocol')} />
        <ProblemNote error={change.error} />
      </div>
      <Actions>
        <Button tone="main" type="submit" busy={change.isPending}>Keep</Button>
        <Button tone="quiet" onClick={onClose}>Leave as it was</Button>
      </Actions>
    </form>
  );
}

import { zodResolver } from '@hookform/resolvers/zod';
import { useMutation, useQueryClient } from '@tanstack/react-query';
import { useForm } from 'react-hook-form';
import type { z } from 'zod';
import { changeMe } from '@shared/api/people';
import { call } from '../../lib/api';
import { meQuery } from '../../lib/me';
import { Button } from '../../ui/Button';
import { TextField } from '../../ui/Field';
import { ProblemNote } from '../../ui/ProblemNote';

const entry = changeMe.body;
type Entry = z.infer<typeof entry>;

export function NameForm({ name }: { name: string }) {
  const queries = useQueryClient();
  const form = useForm<Entry>({ resolver: zodResolver(entry), values: { name } });
  const save = useMutation({ mutationFn: (body: Entry) => call(changeMe, { body }), onSuccess: (me) => queries.setQueryData(meQuery.queryKey, me) });
  return (
    <form noValidate className="max-w-[32rem] grid gap-3" onSubmit={form.handleSubmit((values) => save.mutate(values))}>
      <TextField label="Name" labelHidden autoComplete="name" error={form.formState.errors.name?.message} {...form.register('name')} />
      <ProblemNote error={save.error} />
      <div className="flex items-center gap-4"><Button type="submit" busy={save.isPending}>Keep the name</Button><span role="status" className="text-small text-soft">{save.isSuccess ? 'Kept.' : ''}</span></div>
    </form>
  );
}

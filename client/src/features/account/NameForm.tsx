import { zodResolver } from '@hookform/resolvers/zod';
import { useMutation, useQueryClient } from '@tanstack/react-query';
import { useForm } from 'react-hook-form';
import { z } from 'zod';
import { line } from '@shared/api/common';
import { changeName } from '../../lib/auth';
import { meQuery } from '../../lib/me';
import { Button } from '../../ui/Button';
import { TextField } from '../../ui/Field';
import { ProblemNote } from '../../ui/ProblemNote';

const entry = z.object({ name: line(80) });
type Entry = z.infer<typeof entry>;

export function NameForm({ name }: { name: string }) {
  const queries = useQueryClient();
  const form = useForm<Entry>({ resolver: zodResolver(entry), values: { name } });
  const save = useMutation({ mutationFn: (values: Entry) => changeName(values.name), onSuccess: () => queries.invalidateQueries({ queryKey: meQuery.queryKey }) });
  return (
    <form noValidate className="max-w-[32rem] grid gap-3" onSubmit={form.handleSubmit((values) => save.mutate(values))}>
      <TextField label="Name" autoComplete="name" error={form.formState.errors.name?.message} {...form.register('name')} />
      <ProblemNote error={save.error} />
      <div className="flex items-center gap-4"><Button type="submit" busy={save.isPending}>Keep the name</Button><span role="status" className="text-small text-soft">{save.isSuccess ? 'Kept.' : ''}</span></div>
    </form>
  );
}

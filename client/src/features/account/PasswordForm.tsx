import { zodResolver } from '@hookform/resolvers/zod';
import { useMutation, useQueryClient } from '@tanstack/react-query';
import { useForm } from 'react-hook-form';
import { z } from 'zod';
import { password } from '@shared/api/people';
import { changePassword } from '../../lib/auth';
import { Button } from '../../ui/Button';
import { TextField } from '../../ui/Field';
import { ProblemNote } from '../../ui/ProblemNote';
import { signInsKey } from './sign-ins-key';

const entry = z.object({ present: z.string().min(1, 'Write the present password'), next: password, again: z.string() })
  .refine((value) => value.next === value.again, { path: ['again'], message: 'The two are not the same' });
type Entry = z.infer<typeof entry>;

export function PasswordForm() {
  const queries = useQueryClient();
  const form = useForm<Entry>({ resolver: zodResolver(entry), defaultValues: { present: '', next: '', again: '' } });
  const save = useMutation({
    mutationFn: (values: Entry) => changePassword(values.present, values.next),
    onSuccess: async () => {
      form.reset();
      await queries.invalidateQueries({ queryKey: signInsKey });
    },
  });
  const { errors } = form.formState;
  return (
    <form noValidate className="max-w-[32rem] grid gap-4" onSubmit={form.handleSubmit((values) => save.mutate(values))}>
      <TextField label="Present password" type="password" autoComplete="current-password" error={errors.present?.message} {...form.register('present')} />
      <TextField label="New password" type="password" autoComplete="new-password" help="At least 12 characters. A few unrelated words do well." error={errors.next?.message} {...form.register('next')} />
      <TextField label="The new one again" type="password" autoComplete="new-password" error={errors.again?.message} {...form.register('again')} />
      <ProblemNote error={save.error} />
      <div className="flex items-center gap-4"><Button type="submit" busy={save.isPending}>Change the password</Button><span role="status" className="text-small text-soft">{save.isSuccess ? 'Changed; all other sign-ins have ended.' : ''}</span></div>
    </form>
  );
}

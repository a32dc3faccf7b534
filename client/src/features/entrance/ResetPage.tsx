import { zodResolver } from '@hookform/resolvers/zod';
import { useMutation } from '@tanstack/react-query';
import { useForm } from 'react-hook-form';
import { Link, useNavigate, useSearchParams } from 'react-router-dom';
import { z } from 'zod';
import { password } from '@shared/api/people';
import { resetPassword } from '../../lib/auth';
import { Button, ButtonLink } from '../../ui/Button';
import { Actions } from '../../ui/Dialog';
import { TextField } from '../../ui/Field';
import { PageTitle } from '../../ui/Page';
import { ProblemNote } from '../../ui/ProblemNote';

const entry = z.object({ password, again: z.string() })
  .refine((value) => value.password === value.again, { path: ['again'], message: 'The two are not the same' });

export function ResetPage() {
  const [search] = useSearchParams();
  const navigate = useNavigate();
  const token = search.get('token');
  const form = useForm<z.input<typeof entry>>({ resolver: zodResolver(entry), defaultValues: { password: '', again: '' } });
  const save = useMutation({
    mutationFn: (values: z.output<typeof entry>) => resetPassword(token ?? '', values.password),
    onSuccess: () => navigate('/sign-in?reset=done'),
  });
  const { errors } = form.formState;
  return (
    <div className="max-w-[26rem]">
      <title>Set a password · Tautbook</title>
      <PageTitle>Set a password</PageTitle>
      {token === null || search.get('error') !== null ? (
        <>
          <p className="mt-2">This link is not complete, was used already, or is too old.</p>
          <div className="mt-5"><ButtonLink tone="main" to="/forgot">Have a new link sent</ButtonLink></div>
        </>
      ) : (
        <form noValidate className="mt-4" onSubmit={form.handleSubmit((values) => save.mutate(values))}>
          <div className="grid gap-4">
            <TextField label="New password" type="password" autoComplete="new-password" help="At least 12 characters. A few unrelated words do well." error={errors.password?.message} {...form.register('password')} />
            <TextField label="The same again" type="password" autoComplete="new-password" error={errors.again?.message} {...form.register('again')} />
            <ProblemNote error={save.error} />
          </div>
          <Actions><Button tone="main" type="submit" busy={save.isPending}>Set the password</Button></Actions>
        </form>
      )}
      <p className="mt-6 text-small"><Link to="/sign-in" className="link">Back to sign-in</Link></p>
    </div>
  );
}

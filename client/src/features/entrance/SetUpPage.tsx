import { zodResolver } from '@hookform/resolvers/zod';
import { useMutation, useQuery, useQueryClient } from '@tanstack/react-query';
import { useForm } from 'react-hook-form';
import { Navigate, useNavigate } from 'react-router-dom';
import type { z } from 'zod';
import { setUp } from '@shared/api/people';
import { call } from '../../lib/api';
import { signIn } from '../../lib/auth';
import { entranceQuery } from '../../lib/me';
import { Button } from '../../ui/Button';
import { Actions } from '../../ui/Dialog';
import { TextField } from '../../ui/Field';
import { PageTitle } from '../../ui/Page';
import { ProblemNote } from '../../ui/ProblemNote';

const entry = setUp.body;
type Entry = z.output<typeof entry>;

/** First opening of a new installation: whoever can read the server's console makes the administrator. */
export function SetUpPage() {
  const queries = useQueryClient();
  const navigate = useNavigate();
  const entrance = useQuery(entranceQuery);
  const form = useForm<z.input<typeof entry>, unknown, Entry>({ resolver: zodResolver(entry), defaultValues: { code: '', name: '', email: '', password: '' } });
  const make = useMutation({
    mutationFn: async (values: Entry) => {
      await call(setUp, { body: values });
      await signIn(values.email, values.password);
    },
    onSuccess: async () => {
      queries.clear();
      await navigate('/', { replace: true });
    },
  });
  const { errors } = form.formState;
  if (entrance.data && !entrance.data.setupNeeded && make.isIdle) return <Navigate to="/sign-in" replace />;
  return (
    <div className="max-w-[28rem]">
      <title>First opening · Tautbook</title>
      <PageTitle>First opening</PageTitle>
      <p className="text-soft mt-1">This book has nobody in it yet. Make its administrator: the person who invites others, registers devices and looks after the installation.</p>
      <form noValidate className="mt-6" onSubmit={form.handleSubmit((values) => make.mutate(values))}>
        <div className="grid gap-4">
          <TextField label="One-time code" autoComplete="one-time-code" spellCheck={false} help="Printed on the server’s console when it started. It works once." error={errors.code?.message} {...form.register('code')} />
          <TextField label="Name" autoComplete="name" help="As colleagues will see it beside notes and log entries." error={errors.name?.message} {...form.register('name')} />
          <TextField label="E-mail" type="email" autoComplete="username" error={errors.email?.message} {...form.register('email')} />
          <TextField label="Password" type="password" autoComplete="new-password" help="At least 12 characters. A few unrelated words do well." error={errors.password?.message} {...form.register('password')} />
          <ProblemNote error={make.error} />
        </div>
        <Actions><Button tone="main" type="submit" busy={make.isPending}>Open the book</Button></Actions>
      </form>
    </div>
  );
}

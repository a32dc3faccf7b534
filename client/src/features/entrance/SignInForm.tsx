import { zodResolver } from '@hookform/resolvers/zod';
import { useMutation } from '@tanstack/react-query';
import { useForm } from 'react-hook-form';
import { z } from 'zod';
import { emailAddress } from '@shared/api/people';
import { signIn } from '../../lib/auth';
import { Button } from '../../ui/Button';
import { Actions } from '../../ui/Dialog';
import { TextField } from '../../ui/Field';
import { ProblemNote } from '../../ui/ProblemNote';

const entry = z.object({
  email: z.string().trim().min(1, 'Write your e-mail address').pipe(emailAddress),
  password: z.string().min(1, 'Write your password'),
});

interface SignInFormProps {
  /** Filled in where it is known who was here. */
  email?: string;
  onSignedIn: () => Promise<void> | void;
}

export function SignInForm({ email = '', onSignedIn }: SignInFormProps) {
  const form = useForm<z.input<typeof entry>, unknown, z.output<typeof entry>>({ resolver: zodResolver(entry), defaultValues: { email, password: '' } });
  const enter = useMutation({ mutationFn: (values: z.output<typeof entry>) => signIn(values.email, values.password), onSuccess: onSignedIn });
  const { errors } = form.formState;
  return (
    <form noValidate onSubmit={form.handleSubmit((values) => enter.mutate(values))}>
      <div className="grid gap-4">
        <TextField label="E-mail" type="email" autoComplete="username" error={errors.email?.message} {...form.register('email')} />
        <TextField label="Password" type="password" autoComplete="current-password" autoFocus={email !== ''} error={errors.password?.message} {...form.register('password')} />
        <ProblemNote error={enter.error} />
      </div>
      <Actions><Button tone="main" type="submit" busy={enter.isPending}>Sign in</Button></Actions>
    </form>
  );
}

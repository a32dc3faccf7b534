import { zodResolver } from '@hookform/resolvers/zod';
import { useMutation } from '@tanstack/react-query';
import { useForm } from 'react-hook-form';
import { Link } from 'react-router-dom';
import { z } from 'zod';
import { emailAddress } from '@shared/api/people';
import { requestReset } from '../../lib/auth';
import { Button } from '../../ui/Button';
import { Actions } from '../../ui/Dialog';
import { TextField } from '../../ui/Field';
import { PageTitle } from '../../ui/Page';
import { ProblemNote } from '../../ui/ProblemNote';

const entry = z.object({ email: z.string().trim().min(1, 'Write your e-mail address').pipe(emailAddress) });

export function ForgotPage() {
  const form = useForm<z.input<typeof entry>, unknown, z.output<typeof entry>>({ resolver: zodResolver(entry), defaultValues: { email: '' } });
  const ask = useMutation({ mutationFn: (values: z.output<typeof entry>) => requestReset(values.email) });
  return (
    <div className="max-w-[26rem]">
      <title>Forgot the password · Tautbook</title>
      <PageTitle>Forgot the password</PageTitle>
      {ask.isSuccess ? (
        <div role="status">
          <p className="mt-2">If this address belongs to somebody in the lab, a mail with a link is on its way. The link works for one hour.</p>
          <p className="mt-2 text-soft">Nothing after a few minutes? Look among unwanted mail, then ask the administrator: where no mail server is set, mail waits in the outbox of this book.</p>
        </div>
      ) : (
        <form noValidate className="mt-4" onSubmit={form.handleSubmit((values) => ask.mutate(values))}>
          <div className="grid gap-4">
            <TextField label="E-mail" type="email" autoComplete="username" help="The address you sign in with. A link to set a new password goes there." error={form.formState.errors.email?.message} {...form.register('email')} />
            <ProblemNote error={ask.error} />
          </div>
          <Actions><Button tone="main" type="submit" busy={ask.isPending}>Send the link</Button></Actions>
        </form>
      )}
      <p className="mt-6 text-small"><Link to="/sign-in" className="link">Back to sign-in</Link></p>
    </div>
  );
}

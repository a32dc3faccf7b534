import { zodResolver } from '@hookform/resolvers/zod';
import { useForm } from 'react-hook-form';
import { Link } from 'react-router-dom';
import type { z } from 'zod';
import { labRole } from '@shared/api/common';
import { invitePerson } from '@shared/api/people';
import { ROLE_WORDS } from '../../lib/words';
import { Button } from '../../ui/Button';
import { Actions, Dialog } from '../../ui/Dialog';
import { SelectField, TextField } from '../../ui/Field';
import { ProblemNote } from '../../ui/ProblemNote';
import { useInvitePerson } from './queries';
import { ROLE_MEANING } from './role-meaning';

const body = invitePerson.body;

export function InviteDialog({ onClose }: { onClose: () => void }) {
  const invite = useInvitePerson();
  const form = useForm<z.input<typeof body>, unknown, z.output<typeof body>>({ resolver: zodResolver(body), defaultValues: { name: '', email: '', role: 'operator' } });
  const { errors } = form.formState;
  const role = form.watch('role');
  if (invite.isSuccess) {
    return (
      <Dialog open onOpenChange={onClose} title={`${invite.data.name} is invited`} description={`A mail with a link to set a password went to ${invite.data.email}.`}>
        <p className="text-small text-soft">Where no mail server is set, it waits in <Link to="/outbox" className="link">the mail of this book</Link>: copy the link from there.</p>
        <Actions><Button tone="main" onClick={onClose}>Done</Button></Actions>
      </Dialog>
    );
  }
  return (
    <Dialog open onOpenChange={onClose} title="Invite a person" description="They get a mail with a link to set their own password.">
      <form noValidate onSubmit={form.handleSubmit((values) => invite.mutate(values))}>
        <div className="grid gap-4">
          <TextField label="Name" autoComplete="off" help="As colleagues will see it beside notes and log entries." error={errors.name?.message} {...form.register('name')} />
          <TextField label="E-mail" type="email" autoComplete="off" error={errors.email?.message} {...form.register('email')} />
          <SelectField label="Role in the lab" help={ROLE_MEANING[role]} {...form.register('role')}>
            {labRole.options.map((option) => <option key={option} value={option}>{ROLE_WORDS[option]}</option>)}
          </SelectField>
          <ProblemNote error={invite.error} />
        </div>
        <Actions>
          <Button tone="main" type="submit" busy={invite.isPending}>Send the invitation</Button>
          <Button tone="quiet" onClick={onClose}>Not now</Button>
        </Actions>
      </form>
    </Dialog>
  );
}

import { zodResolver } from '@hookform/resolvers/zod';
import { useQuery } from '@tanstack/react-query';
import { useForm } from 'react-hook-form';
import { z } from 'zod';
import { line, rigId } from '@shared/api/common';
import { Button, ButtonLink } from '../../ui/Button';
import { CopyLine } from '../../ui/CopyLine';
import { Actions, Dialog } from '../../ui/Dialog';
import { SelectField, TextField } from '../../ui/Field';
import { ProblemNote } from '../../ui/ProblemNote';
import { rigsQuery } from '../rigs';
import { useRegisterDevice } from './queries';

const entry = z.object({ name: line(80), rigId: z.string().min(1, 'Choose the rig it is').pipe(rigId) });

/** Registers a device; its key shows in the second half of the slip and never again. */
export function RegisterDialog({ onClose }: { onClose: () => void }) {
  const rigs = useQuery(rigsQuery);
  const register = useRegisterDevice();
  const form = useForm<z.input<typeof entry>, unknown, z.output<typeof entry>>({ resolver: zodResolver(entry), defaultValues: { name: '', rigId: '' } });
  const { errors } = form.formState;

  if (register.isSuccess) {
    const { device, key } = register.data;
    return (
      <Dialog open holding onOpenChange={onClose} title={`The key of ${device.name}`} description="Shown once. This book keeps only its hash: a lost key cannot be read again, only replaced by registering anew.">
        <div className="grid gap-2">
          <CopyLine label="Key" text={key} />
          <CopyLine label="Address of the device link" text={`${location.protocol === 'https:' ? 'wss:' : 'ws:'}//${location.host}/link/v1`} />
        </div>
        <Actions><Button tone="main" onClick={onClose}>I have put the key away</Button></Actions>
      </Dialog>
    );
  }
  return (
    <Dialog open onOpenChange={onClose} title="Register a device" description="One physical or simulated unit of a rig. It gets a key of its own.">
      {rigs.data?.length === 0 ? (
        <>
          <p>A device is a unit of a rig, and no rig has been imported yet.</p>
          <Actions><ButtonLink tone="main" to="/rigs/import">Import a rig file</ButtonLink></Actions>
        </>
      ) : (
        <form noValidate onSubmit={form.handleSubmit((values) => register.mutate(values))}>
          <div className="grid gap-4">
            <TextField label="Name" autoComplete="off" help="Where it stands or what is written on it, like Bench 2." error={errors.name?.message} {...form.register('name')} />
            <SelectField label="Rig" error={errors.rigId?.message} {...form.register('rigId')}>
              <option value="">{rigs.isPending ? 'Loading' : 'Choose'}</option>
              {rigs.data?.map((rig) => <option key={rig.id} value={rig.id}>{rig.title}</option>)}
            </SelectField>
            <ProblemNote error={rigs.error} onRetry={() => void rigs.refetch()} />
            <ProblemNote error={register.error} />
          </div>
          <Actions>
            <Button tone="main" type="submit" busy={register.isPending}>Register</Button>
            <Button tone="quiet" onClick={onClose}>Not now</Button>
          </Actions>
        </form>
      )}
    </Dialog>
  );
}

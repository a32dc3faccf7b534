import { zodResolver } from '@hookform/resolvers/zod';
import { useSuspenseQuery } from '@tanstack/react-query';
import { useState } from 'react';
import { useForm } from 'react-hook-form';
import type { z } from 'zod';
import { addParticipant, type Participant, type Study } from '@shared/api/studies';
import { count, counted } from '../../lib/format';
import { Button } from '../../ui/Button';
import { Actions, Dialog } from '../../ui/Dialog';
import { Empty } from '../../ui/Empty';
import { SelectField, TextField } from '../../ui/Field';
import { Section } from '../../ui/Page';
import { ProblemNote } from '../../ui/ProblemNote';
import { RuledTable } from '../../ui/RuledTable';
import { participantsQuery, useAddParticipant } from './queries';

const HANDS: Readonly<Record<Participant['hand'], string>> = { left: 'left hand', right: 'right hand', both: 'both hands' };

export function ParticipantsPanel({ study, adds }: { study: Study; adds: boolean }) {
  const participants = useSuspenseQuery(participantsQuery(study.id)).data;
  const [adding, setAdding] = useState(false);
  const add = adds ? <Button tone={participants.length === 0 ? 'ruled' : 'quiet'} onClick={() => setAdding(true)}>Add a participant</Button> : null;
  return (
    <Section narrow id="participants" title="Participants" note={participants.length > 0 ? counted(participants.length, 'code') : undefined} actions={participants.length > 0 ? add : null}>
      {participants.length === 0 ? (
        <Empty title="Nobody takes part yet" action={add}>Participants stand in this book under a code: never a name, a birth date or a contact.</Empty>
      ) : (
        <RuledTable
          caption="Participants"
          rows={participants}
          rowKey={(row) => row.id}
          columns={[
            { key: 'code', head: 'Code', lead: true, cell: (row) => <span className="font-semibold">{row.code}</span> },
            { key: 'hand', head: 'Works with', plain: true, width: '12rem', cell: (row) => HANDS[row.hand] },
            { key: 'sessions', head: 'Sessions', width: '7rem', align: 'right', cell: (row) => count(row.sessions) },
          ]}
        />
      )}
      {adding ? <AddParticipant study={study} onClose={() => setAdding(false)} /> : null}
    </Section>
  );
}

const body = addParticipant.body;

function AddParticipant({ study, onClose }: { study: Study; onClose: () => void }) {
  const add = useAddParticipant(study.id);
  const form = useForm<z.input<typeof body>, unknown, z.output<typeof body>>({ resolver: zodResolver(body), defaultValues: { code: '', hand: 'right' } });
  const { errors } = form.formState;
  return (
    <Dialog open onOpenChange={onClose} title="Add a participant" description="The list that ties codes to people stays outside this book, with whoever the ethics agreement names.">
      <form noValidate onSubmit={form.handleSubmit((values) => add.mutate(values, { onSuccess: onClose }))}>
        <div className="grid gap-4">
          <TextField label="Code" autoComplete="off" help="Letters, a hyphen and digits, like K-014." error={errors.code?.message} {...form.register('code')} />
          <SelectField label="Works with" {...form.register('hand')}>
            {Object.entries(HANDS).map(([hand, words]) => <option key={hand} value={hand}>{words}</option>)}
          </SelectField>
          <ProblemNote error={add.error} />
        </div>
        <Actions>
          <Button tone="main" type="submit" busy={add.isPending}>Add the participant</Button>
          <Button tone="quiet" onClick={onClose}>Not now</Button>
        </Actions>
      </form>
    </Dialog>
  );
}

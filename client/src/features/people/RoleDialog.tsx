import { useState, type FormEvent } from 'react';
import { labRole } from '@shared/api/common';
import type { Person } from '@shared/api/people';
import { ROLE_WORDS } from '../../lib/words';
import { Button } from '../../ui/Button';
import { Actions, Dialog } from '../../ui/Dialog';
import { SelectField } from '../../ui/Field';
import { ProblemNote } from '../../ui/ProblemNote';
import { useChangePerson } from './queries';
import { ROLE_MEANING } from './role-meaning';

export function RoleDialog({ person, onClose }: { person: Person; onClose: () => void }) {
  const [role, setRole] = useState(person.role);
  const change = useChangePerson();
  const submit = (event: FormEvent) => {
    event.preventDefault();
    change.mutate({ personId: person.id, role }, { onSuccess: onClose });
  };
  return (
    <Dialog open onOpenChange={onClose} title={`Role of ${person.name}`} description="Memberships in studies stay as they are.">
      <form onSubmit={submit}>
        <div className="grid gap-4">
          <SelectField label="Role in the lab" help={ROLE_MEANING[role]} value={role} onChange={(event) => setRole(labRole.parse(event.target.value))}>
            {labRole.options.map((option) => <option key={option} value={option}>{ROLE_WORDS[option]}</option>)}
          </SelectField>
          <ProblemNote error={change.error} />
        </div>
        <Actions>
          <Button tone="main" type="submit" busy={change.isPending}>Keep</Button>
          <Button tone="quiet" onClick={onClose}>Not now</Button>
        </Actions>
      </form>
    </Dialog>
  );
}

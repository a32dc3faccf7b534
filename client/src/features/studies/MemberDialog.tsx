import { zodResolver } from '@hookform/resolvers/zod';
import { useQuery } from '@tanstack/react-query';
import { useEffect } from 'react';
import { useForm } from 'react-hook-form';
import { z } from 'zod';
import { fittingStudyRoles, labRole, personId, studyRole, type StudyRole } from '@shared/api/common';
import type { Member, Study } from '@shared/api/studies';
import { STUDY_ROLE_WORDS } from '../../lib/words';
import { Button } from '../../ui/Button';
import { Actions, Dialog } from '../../ui/Dialog';
import { CheckField, SelectField } from '../../ui/Field';
import { ProblemNote } from '../../ui/ProblemNote';
import { candidatesQuery, useSetMember } from './queries';

const entry = z.object({ personId: z.string().min(1, 'Choose a person').pipe(personId), role: studyRole, blind: z.boolean() });
type Input = z.input<typeof entry>;
type Output = z.output<typeof entry>;

const MAY: Readonly<Record<StudyRole, string>> = {
  lead: 'Sets up the study, its members and sessions; judges, signs and releases.',
  operator: 'Plans and runs sessions, records, replays and writes notes.',
  clinician: 'Reads released summaries and the trials they name.',
  reader: 'Replays and writes notes, nothing else.',
};

/** What a person of the lab can be in a study. */
function rolesFor(role: string | undefined): readonly StudyRole[] {
  const known = labRole.safeParse(role);
  return known.success ? fittingStudyRoles[known.data] : studyRole.options;
}

/** Roles that fit some lab role that also fits this one. */
const rolesBeside = (role: StudyRole): readonly StudyRole[] =>
  studyRole.options.filter((option) => Object.values(fittingStudyRoles).some((fitting) => fitting.includes(role) && fitting.includes(option)));

interface MemberDialogProps {
  study: Study;
  /** Left out: somebody new. */
  member?: Member;
  onClose: () => void;
}

export function MemberDialog({ study, member, onClose }: MemberDialogProps) {
  const candidates = useQuery({ ...candidatesQuery(study.id), enabled: member === undefined });
  const set = useSetMember(study.id);
  const form = useForm<Input, unknown, Output>({
    resolver: zodResolver(entry),
    defaultValues: { personId: member?.personId ?? '', role: member?.role ?? 'operator', blind: member?.blind ?? false },
  });
  const { errors } = form.formState;
  const role = form.watch('role');
  const chosen = form.watch('personId');
  const people = candidates.data ?? [];
  const roles = member ? rolesBeside(member.role) : rolesFor(people.find((person) => person.id === chosen)?.role);
  // Another person may not fit the role that was chosen for the one before.
  useEffect(() => {
    if (roles[0] !== undefined && !roles.includes(role)) form.setValue('role', roles[0]);
  }, [roles, role, form]);
  const nobody = member === undefined && candidates.isSuccess && people.length === 0;
  return (
    <Dialog open onOpenChange={onClose} title={member ? `Change ${member.name}` : 'Add a member'} description="What one may do in a study comes from the membership alone.">
      {nobody ? <p>Everybody of the lab is a member already. An administrator invites people under People.</p> : (
        <form noValidate onSubmit={form.handleSubmit((values) => set.mutate(values, { onSuccess: onClose }))}>
          <div className="grid gap-4">
            {member ? <input type="hidden" {...form.register('personId')} /> : (
              <SelectField label="Person" error={errors.personId?.message} {...form.register('personId')}>
                <option value="">{candidates.isPending ? 'Loading' : 'Choose'}</option>
                {people.map((person) => <option key={person.id} value={person.id}>{person.name}, {person.role}</option>)}
              </SelectField>
            )}
            <ProblemNote error={candidates.error} onRetry={() => void candidates.refetch()} />
            <SelectField label="Role in this study" help={MAY[role]} {...form.register('role')}>
              {roles.map((option) => <option key={option} value={option}>{STUDY_ROLE_WORDS[option]}</option>)}
            </SelectField>
            <CheckField label="Blind to conditions" help="Sees condition codes, not labels, wherever trials are shown." {...form.register('blind')} />
            <ProblemNote error={set.error} />
          </div>
          <Actions>
            <Button tone="main" type="submit" busy={set.isPending}>{member ? 'Keep' : 'Add the member'}</Button>
            <Button tone="quiet" onClick={onClose}>Not now</Button>
          </Actions>
        </form>
      )}
    </Dialog>
  );
}

import { useState } from 'react';
import type { Study } from '@shared/api/studies';
import { Button } from '../../ui/Button';
import { ConfirmDialog } from '../../ui/ConfirmDialog';
import { useChangeStudy } from './queries';

interface Step {
  to: Study['state'];
  verb: string;
  what: string;
}

const NEXT: Readonly<Record<Study['state'], Step | null>> = {
  draft: { to: 'running', verb: 'Begin the study', what: 'Sessions count from now on. Conditions and tasks stay as they are.' },
  running: { to: 'closed', verb: 'Close the study', what: 'No session can be planned in it after that. Reading, notes and verdicts stay open.' },
  closed: { to: 'running', verb: 'Open the study again', what: 'Sessions can be planned again. The audit trail says so.' },
  archived: null,
};

/** The next step in the life of a study. */
export function StudyStateMenu({ study }: { study: Study }) {
  const [open, setOpen] = useState(false);
  const change = useChangeStudy(study.id);
  const step = NEXT[study.state];
  if (step === null) return null;
  return (
    <>
      <Button onClick={() => setOpen(true)}>{step.verb}</Button>
      <ConfirmDialog open={open} onOpenChange={setOpen} title={step.verb} confirm={step.verb} busy={change.isPending} error={change.error} onConfirm={() => change.mutate({ state: step.to }, { onSuccess: () => setOpen(false) })}>
        {step.what}
      </ConfirmDialog>
    </>
  );
}

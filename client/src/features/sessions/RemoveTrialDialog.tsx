import { useState, type FormEvent } from 'react';
import type { TrialSummary } from '@shared/api/sessions';
import { Button } from '../../ui/Button';
import { Actions, Dialog } from '../../ui/Dialog';
import { TextArea } from '../../ui/Field';
import { ProblemNote } from '../../ui/ProblemNote';
import { useRemoveTrial } from './queries';

/** Takes a trial out of its session; nothing recorded is destroyed. */
export function RemoveTrialDialog({ trial, onClose }: { trial: TrialSummary; onClose: () => void }) {
  const remove = useRemoveTrial(trial.id);
  const [reason, setReason] = useState('');
  const [asked, setAsked] = useState(false);
  const submit = (event: FormEvent) => {
    event.preventDefault();
    setAsked(true);
    if (reason.trim() !== '') remove.mutate(reason, { onSuccess: onClose });
  };
  return (
    <Dialog open onOpenChange={onClose} title={`Take trial ${trial.number} out`} description="It no longer shows in the session. Its recording is kept, and the log says who took it out and why.">
      <form noValidate onSubmit={submit}>
        <div className="grid gap-4">
          <TextArea label="Reason" rows={2} value={reason} onChange={(event) => setReason(event.target.value)} error={asked && reason.trim() === '' ? 'Say why: others will ask' : undefined} />
          <ProblemNote error={remove.error} />
        </div>
        <Actions>
          <Button tone="grave" type="submit" busy={remove.isPending}>Take it out</Button>
          <Button tone="quiet" onClick={onClose}>Leave it in</Button>
        </Actions>
      </form>
    </Dialog>
  );
}

import type { TrialSummary } from '@shared/api/sessions';
import { Dialog } from '../../ui/Dialog';
import { OutcomeForm } from './OutcomeForm';

interface OutcomeDialogProps {
  trial: TrialSummary;
  onClose: () => void;
}

/** Gives a recorded trial its outcome, or corrects it. */
export function OutcomeDialog({ trial, onClose }: OutcomeDialogProps) {
  return (
    <Dialog open onOpenChange={onClose} title={`Outcome of trial ${trial.number}`} description={`${trial.task.title}. The log keeps who gave which outcome and when.`}>
      <OutcomeForm trial={trial} onKept={onClose} onCancel={onClose} />
    </Dialog>
  );
}

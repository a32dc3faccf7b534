import type { ReactNode } from 'react';
import { Button } from './Button';
import { Actions, Dialog } from './Dialog';
import { ProblemNote } from './ProblemNote';

interface ConfirmDialogProps {
  open: boolean;
  onOpenChange: (open: boolean) => void;
  title: string;
  /** What will happen, and whether it can be taken back. */
  children: ReactNode;
  confirm: string;
  grave?: boolean;
  busy?: boolean;
  error?: unknown;
  onConfirm: () => void;
}

export function ConfirmDialog({ open, onOpenChange, title, children, confirm, grave = false, busy = false, error, onConfirm }: ConfirmDialogProps) {
  return (
    <Dialog open={open} onOpenChange={onOpenChange} title={title} description={children}>
      <ProblemNote error={error} />
      <Actions>
        <Button tone={grave ? 'grave' : 'main'} busy={busy} onClick={onConfirm}>{confirm}</Button>
        <Button tone="quiet" onClick={() => onOpenChange(false)}>Leave as it is</Button>
      </Actions>
    </Dialog>
  );
}

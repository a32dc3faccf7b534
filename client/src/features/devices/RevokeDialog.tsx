import type { Device } from '@shared/api/rigs';
import { ConfirmDialog } from '../../ui/ConfirmDialog';
import { useRevokeDevice } from './queries';

export function RevokeDialog({ device, onClose }: { device: Device; onClose: () => void }) {
  const revoke = useRevokeDevice();
  return (
    <ConfirmDialog
      open
      onOpenChange={onClose}
      title={`Revoke ${device.name}`}
      confirm="Revoke its key"
      grave
      busy={revoke.isPending}
      error={revoke.error}
      onConfirm={() => revoke.mutate(device.id, { onSuccess: onClose })}
    >
      <p>Its key stops working at once and never works again. What it recorded stays.</p>
      {device.state === 'recording' ? <p className="mt-1 font-semibold">It is recording now: what it sends after this moment is not kept.</p> : null}
    </ConfirmDialog>
  );
}

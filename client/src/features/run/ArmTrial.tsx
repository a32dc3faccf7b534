import { useQuery, useQueryClient } from '@tanstack/react-query';
import { useState } from 'react';
import type { RigId } from '@shared/api/common';
import type { Device } from '@shared/api/rigs';
import type { TrialSummary } from '@shared/api/sessions';
import { useRoom } from '../../lib/live';
import { Button } from '../../ui/Button';
import { Actions } from '../../ui/Dialog';
import { ProblemNote } from '../../ui/ProblemNote';
import { WaitingLines } from '../../ui/Waiting';
import { devicesQuery } from '../devices';
import { useArm } from './queries';
import { useFocusOnce } from './use-focus-once';

const WORDS: Readonly<Record<Device['state'], string>> = { connected: 'connected', recording: 'recording', registered: 'not connected', revoked: 'revoked' };

/** Chooses a device of the session's rig and arms the trial on it. */
export function ArmTrial({ trial, rigId }: { trial: TrialSummary; rigId: RigId }) {
  const queries = useQueryClient();
  const devices = useQuery(devicesQuery);
  const arm = useArm(trial.id);
  const [chosen, setChosen] = useState<string | null>(null);
  const focus = useFocusOnce<HTMLButtonElement>();
  useRoom('devices', (message) => {
    if (message.type === 'device') void queries.invalidateQueries({ queryKey: ['devices'] });
  });
  if (devices.error) return <ProblemNote error={devices.error} onRetry={() => void devices.refetch()} />;
  if (!devices.data) return <WaitingLines />;
  const offered = devices.data.filter((device) => device.rigId === rigId && device.state !== 'revoked');
  const ready = offered.find((device) => device.id === chosen && device.state === 'connected') ?? offered.find((device) => device.state === 'connected');
  if (offered.length === 0) {
    return (
      <div className="border-y border-rule py-3">
        <p className="font-semibold">No device of this rig is registered.</p>
        <p className="text-small text-soft">An administrator registers one under Devices; then connect it with its key.</p>
      </div>
    );
  }
  return (
    <div>
      <p id="device-choice" className="text-small font-semibold pb-1">Device</p>
      <div role="radiogroup" aria-labelledby="device-choice" className="border-t border-rule">
        {offered.map((device) => (
          <label key={device.id} className="flex items-baseline gap-x-3 border-b border-rule py-2">
            <input type="radio" name="device" className="size-4.5 self-center accent-ink" checked={device.id === ready?.id} disabled={device.state !== 'connected'} onChange={() => setChosen(device.id)} />
            <span className="font-semibold">{device.name}</span>
            <span className="ml-auto text-small text-soft">{WORDS[device.state]}</span>
          </label>
        ))}
      </div>
      {ready ? null : <p role="status" className="mt-2 text-small text-soft">{offered.some((device) => device.state === 'recording') ? 'The device is recording another trial: wait until it ends, or stop it.' : 'Switch the device on; it appears here once its link is up.'}</p>}
      <ProblemNote className="mt-3" error={arm.error} />
      <Actions>
        <Button ref={focus} tone="main" busy={arm.isPending} disabled={!ready} onClick={() => ready && arm.mutate(ready.id)}>Arm trial {trial.number}</Button>
      </Actions>
    </div>
  );
}

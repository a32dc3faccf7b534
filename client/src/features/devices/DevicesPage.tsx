import { useQueryClient, useSuspenseQuery } from '@tanstack/react-query';
import { useState } from 'react';
import { Link } from 'react-router-dom';
import type { Device } from '@shared/api/rigs';
import { count, microseconds, wallTime } from '../../lib/format';
import { useRoom } from '../../lib/live';
import { useMe } from '../../lib/me';
import { Button } from '../../ui/Button';
import { Caution } from '../../ui/Caution';
import { Empty } from '../../ui/Empty';
import { Page, Section } from '../../ui/Page';
import { RuledTable, type RuledColumn } from '../../ui/RuledTable';
import { StateWord, type StateTone } from '../../ui/StateWord';
import { devicesQuery } from './queries';
import { RegisterDialog } from './RegisterDialog';
import { RevokeDialog } from './RevokeDialog';

const STATES: Readonly<Record<Device['state'], { word: string; tone: StateTone }>> = {
  registered: { word: 'not connected', tone: 'plain' },
  connected: { word: 'connected', tone: 'live' },
  recording: { word: 'recording', tone: 'live' },
  revoked: { word: 'revoked', tone: 'plain' },
};

function DeviceState({ device }: { device: Device }) {
  const { word, tone } = STATES[device.state];
  const since = device.state === 'revoked' && device.revokedAt !== null ? wallTime(device.revokedAt) : device.state === 'registered' ? (device.lastSeenAt === null ? 'never seen' : `last seen ${wallTime(device.lastSeenAt)}`) : null;
  return <><StateWord tone={tone}>{word}</StateWord>{since ? <span className="sm:block text-small text-soft"><span className="sm:hidden">, </span>{since}</span> : null}</>;
}

function FaultCounts({ faults }: { faults: Device['faults'] }) {
  const counts = Object.entries(faults);
  if (counts.length === 0) return <span className="text-soft">none</span>;
  return <ul>{counts.map(([code, times]) => <li key={code} className="text-small">{code} <span className="text-soft">{count(times)} ×</span></li>)}</ul>;
}

export function DevicesPage() {
  const queries = useQueryClient();
  const devices = useSuspenseQuery(devicesQuery).data;
  const keeps = useMe().role === 'administrator';
  const [registering, setRegistering] = useState(false);
  const [revoking, setRevoking] = useState<Device | null>(null);
  useRoom('devices', (message) => {
    if (message.type === 'device') void queries.invalidateQueries({ queryKey: ['devices'] });
  });
  const button = keeps ? <Button tone="main" onClick={() => setRegistering(true)}>Register a device</Button> : null;

  const columns: RuledColumn<Device>[] = [
    {
      key: 'device',
      head: 'Device',
      lead: true,
      cell: (row) => (
        <>
          <span className="font-semibold">{row.name}</span>
          <span className="block text-small text-soft">key {row.keyHint}</span>
        </>
      ),
    },
    { key: 'rig', head: 'Rig', width: '8rem', cell: (row) => <Link to={`/rigs/${row.rigId}`} className="hover:underline underline-offset-4">{row.rigCode}</Link> },
    { key: 'state', head: 'State', plain: true, width: '12rem', cell: (row) => <DeviceState device={row} /> },
    {
      key: 'clock',
      head: 'Its clock known to',
      width: '14rem',
      // The offset itself says nothing: a device counts from when it was switched on.
      blank: (row) => row.clock === null,
      cell: (row) => <>± {microseconds(row.clock?.uncertaintyUs ?? Number.NaN)}</>,
    },
    { key: 'faults', head: 'Faults answered', width: '12rem', cell: (row) => <FaultCounts faults={row.faults} /> },
    ...(keeps ? [{
      key: 'do',
      head: 'To do',
      plain: true,
      width: '6rem',
      align: 'right' as const,
      cell: (row: Device) => (row.state === 'revoked' ? null : <Button tone="quiet" onClick={() => setRevoking(row)} about={row.name}>Revoke</Button>),
    }] : []),
  ];

  return (
    <Page title="Devices" lead="Rigs, real or simulated, that stream to this book over the device link" actions={devices.length > 0 ? button : null}>
      <Section>
        {devices.length === 0 ? (
          <Empty title="No device is registered" action={button}>{keeps ? 'Register one to get its key; the device shows the key when it connects.' : 'An administrator registers devices and hands out their keys.'}</Empty>
        ) : <RuledTable caption="Devices of the lab" columns={columns} rows={devices} rowKey={(row) => row.id} />}
      </Section>
      <Section><Caution>Revoking a key ends a device’s link to this book; it does not stop the device.</Caution></Section>
      {registering ? <RegisterDialog onClose={() => setRegistering(false)} /> : null}
      {revoking ? <RevokeDialog device={revoking} onClose={() => setRevoking(null)} /> : null}
    </Page>
  );
}

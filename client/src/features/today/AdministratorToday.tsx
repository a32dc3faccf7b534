import { useQuery, useSuspenseQuery } from '@tanstack/react-query';
import { Link } from 'react-router-dom';
import { counted } from '../../lib/format';
import { ButtonLink } from '../../ui/Button';
import { Empty } from '../../ui/Empty';
import { Section } from '../../ui/Page';
import { PanelBoundary } from '../../ui/PanelBoundary';
import { ProblemNote } from '../../ui/ProblemNote';
import { WaitingLines } from '../../ui/Waiting';
import { devicesQuery } from '../devices';
import { AuditTable, latestAuditQuery, peopleQuery } from '../people';
import { rigsQuery } from '../rigs';
import { allStudiesQuery } from '../studies';

/** The installation at a glance, each line leading to where it is kept; what is missing says what to do first. */
export function AdministratorToday() {
  const people = useQuery(peopleQuery);
  const rigs = useQuery(rigsQuery);
  const devices = useQuery(devicesQuery);
  const studies = useQuery(allStudiesQuery);
  const error = people.error ?? rigs.error ?? devices.error ?? studies.error;
  if (error) return <Section title="The installation"><ProblemNote error={error} onRetry={() => void Promise.all([people.refetch(), rigs.refetch(), devices.refetch(), studies.refetch()])} /></Section>;
  if (!people.data || !rigs.data || !devices.data || !studies.data) return <Section title="The installation"><WaitingLines lines={4} /></Section>;
  const invited = people.data.filter((person) => person.state === 'invited').length;
  const alive = devices.data.filter((device) => device.state === 'connected' || device.state === 'recording').length;
  const running = studies.data.filter((study) => study.state === 'running').length;
  const working = devices.data.filter((device) => device.state !== 'revoked').length;
  const lines = [
    { to: '/people', name: 'People', says: people.data.length === 1 ? 'You alone. Invite an experiment lead: leads start studies.' : `${counted(people.data.length, 'person', 'people')}${invited > 0 ? `, ${invited} invited and not here yet` : ''}` },
    { to: '/studies', name: 'Studies', says: studies.data.length === 0 ? 'None yet. An experiment lead starts one.' : `${counted(studies.data.length, 'study', 'studies')}, ${running} running` },
    { to: '/rigs', name: 'Rigs', says: rigs.data.length === 0 ? 'None yet. Import a rig file before a device can be registered.' : counted(rigs.data.length, 'rig') },
    { to: '/devices', name: 'Devices', says: working === 0 ? 'None yet. Register one to get its key.' : `${counted(working, 'device')}, ${alive} connected now` },
  ];
  return (
    <>
      <Section title="The installation">
        <ul className="border-t border-rule-strong">
          {lines.map((line) => (
            <li key={line.to} className="border-b border-rule py-3 grid sm:grid-cols-[10rem_1fr] gap-x-5">
              <Link to={line.to} className="font-semibold hover:underline underline-offset-4">{line.name}</Link>
              <span className="text-soft">{line.says}</span>
            </li>
          ))}
        </ul>
      </Section>
      <Section title="Lately" note="newest first" actions={<ButtonLink tone="quiet" to="/audit">The whole audit trail</ButtonLink>}>
        <PanelBoundary><Lately /></PanelBoundary>
      </Section>
    </>
  );
}

function Lately() {
  const entries = useSuspenseQuery(latestAuditQuery).data;
  if (entries.length === 0) return <Empty title="Nothing has happened yet">The first change writes the first entry.</Empty>;
  return <AuditTable caption="Latest entries of the audit trail" entries={entries} />;
}

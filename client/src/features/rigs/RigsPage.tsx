import { useSuspenseQuery } from '@tanstack/react-query';
import { Link } from 'react-router-dom';
import type { RigSummary } from '@shared/api/rigs';
import { count } from '../../lib/format';
import { useMe } from '../../lib/me';
import { ButtonLink } from '../../ui/Button';
import { Empty } from '../../ui/Empty';
import { Page, Section } from '../../ui/Page';
import { RuledTable, type RuledColumn } from '../../ui/RuledTable';
import { rigsQuery } from './queries';

const columns: RuledColumn<RigSummary>[] = [
  {
    key: 'rig',
    head: 'Rig',
    lead: true,
    cell: (row) => (
      <>
        <Link to={`/rigs/${row.id}`} className="font-semibold hover:underline underline-offset-4">{row.title}</Link>
        <span className="block text-small text-soft">{row.code}</span>
      </>
    ),
  },
  { key: 'cables', head: 'Cables', width: '8rem', align: 'right', cell: (row) => count(row.cableCount) },
  { key: 'revisions', head: 'Revisions', width: '8rem', align: 'right', cell: (row) => count(row.revisions) },
];

export function RigsPage() {
  const rigs = useSuspenseQuery(rigsQuery).data;
  const role = useMe().role;
  const imports = role === 'administrator' || role === 'lead';
  const button = imports ? <ButtonLink tone="main" to="/rigs/import">Import a rig file</ButtonLink> : null;
  return (
    <Page title="Rigs" lead="Cable-driven device models: geometry, limits, stiffness" actions={rigs.length > 0 ? button : null}>
      <Section>
        {rigs.length === 0 ? (
          <Empty title="No rig has been imported yet" action={button}>
            {imports ? 'A rig file says where each cable leaves the frame, where it holds the palm, and what it may carry. Two samples come with Tautbook, under samples/rigs.' : 'An administrator or an experiment lead imports rig files.'}
          </Empty>
        ) : <RuledTable caption="Rigs of the lab" columns={columns} rows={rigs} rowKey={(row) => row.id} />}
      </Section>
    </Page>
  );
}

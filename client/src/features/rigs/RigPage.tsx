import { useSuspenseQuery } from '@tanstack/react-query';
import { useParams, useSearchParams } from 'react-router-dom';
import { rigId as rigIdSchema } from '@shared/api/common';
import type { RigRevision } from '@shared/api/rigs';
import { wallTime } from '../../lib/format';
import { idFromPath } from '../../lib/id-from-path';
import { useMe } from '../../lib/me';
import { Crumbs } from '../../ui/bar-slots';
import { ButtonLink } from '../../ui/Button';
import { Caution } from '../../ui/Caution';
import { Page, Section } from '../../ui/Page';
import { RuledTable, type RuledColumn } from '../../ui/RuledTable';
import { StateWord } from '../../ui/StateWord';
import { CableTable } from './CableTable';
import { LimitFacts } from './LimitFacts';
import { rigQuery } from './queries';
import { RigView } from './RigView';

export function RigPage() {
  const rigId = idFromPath(rigIdSchema, useParams()['rigId']);
  const { rig, revisions } = useSuspenseQuery(rigQuery(rigId)).data;
  const [search, setSearch] = useSearchParams();
  const role = useMe().role;
  const asked = Number(search.get('revision'));
  const shown = revisions.find((revision) => revision.revision === asked) ?? revisions[0];
  if (shown === undefined) return <Page title={rig.title}>{null}</Page>;

  const columns: RuledColumn<RigRevision>[] = [
    {
      key: 'revision',
      head: 'Revision',
      lead: true,
      width: '10rem',
      cell: (row) => (row.id === shown.id
        ? <span className="font-semibold">Revision {row.revision} <StateWord>shown</StateWord></span>
        : <button type="button" className="font-semibold link" onClick={() => setSearch({ revision: String(row.revision) }, { replace: true, preventScrollReset: true })}>Revision {row.revision}</button>),
    },
    { key: 'remark', head: 'What changed', plain: true, cell: (row) => (row.remark === '' ? <span className="text-soft">{row.revision === 1 ? 'first import' : 'no remark'}</span> : row.remark) },
    { key: 'by', head: 'Imported', plain: true, width: '15rem', cell: (row) => <>{row.importedBy}<span className="block text-small text-soft">{wallTime(row.importedAt)}</span></> },
    { key: 'digest', head: 'SHA-256', width: '9rem', align: 'right', cell: (row) => <span className="text-small text-soft" title={row.digest}>{row.digest.slice(0, 12)}…</span> },
  ];

  return (
    <Page
      title={shown.title}
      lead={`${shown.code} · revision ${shown.revision} of ${revisions.length} · ${shown.cableCount} cables`}
      actions={role === 'administrator' || role === 'lead' ? <ButtonLink to="/rigs/import">Import the next revision</ButtonLink> : null}
    >
      <Crumbs steps={[{ to: '/rigs', name: 'Rigs' }]} here={rig.title} />
      <Section note="at its home pose">
        <div className="grid gap-x-10 gap-y-6 lg:grid-cols-[minmax(0,1.15fr)_minmax(0,1fr)]">
          <RigView key={shown.id} file={shown.file} />
          <CableTable file={shown.file} />
        </div>
      </Section>
      <Section title="Limits and calibration"><LimitFacts file={shown.file} digest={shown.digest} /></Section>
      <Section title="Revisions" note="none ever changes">
        <RuledTable caption="Revisions of this rig" columns={columns} rows={revisions} rowKey={(row) => row.id} marked={(row) => row.id === shown.id && revisions.length > 1} />
      </Section>
      <Section><Caution>Limits here describe the rig to this book; the ones that protect people are the rig’s own.</Caution></Section>
    </Page>
  );
}

import { Link } from 'react-router-dom';
import type { SessionSummary } from '@shared/api/sessions';
import { count, visitWords, wallTime } from '../../lib/format';
import { RuledTable, type RuledColumn } from '../../ui/RuledTable';
import { SessionStateWord } from './TrialWords';

interface SessionTableProps {
  caption: string;
  sessions: readonly SessionSummary[];
  /** Shows which study each session belongs to, where sessions of several stand together. */
  withStudy?: boolean;
}

/** Sessions as ruled lines, each leading to its run sheet. */
export function SessionTable({ caption, sessions, withStudy = false }: SessionTableProps) {
  const columns: RuledColumn<SessionSummary>[] = [
    {
      key: 'who',
      head: 'Session',
      lead: true,
      cell: (row) => (
        <>
          <Link to={`/sessions/${row.id}`} className="font-semibold hover:underline underline-offset-4">{row.participantCode}, {visitWords(row.visit)}</Link>
          <span className="block text-small text-soft">{withStudy ? row.studyTitle : `${row.rigTitle}, revision ${row.rigRevision}`}</span>
        </>
      ),
    },
    { key: 'when', head: 'Planned for', plain: true, width: '11rem', cell: (row) => wallTime(row.plannedAt) },
    { key: 'trials', head: 'Trials recorded', width: '9rem', cell: (row) => `${count(row.trialsRecorded)} of ${count(row.trialsPlanned)}` },
    { key: 'flags', head: 'Flags', width: '5rem', align: 'right', cell: (row) => count(row.flags) },
    { key: 'state', head: 'State', plain: true, width: '10rem', align: 'right', cell: (row) => <SessionStateWord state={row.state} /> },
  ];
  return <RuledTable caption={caption} columns={columns} rows={sessions} rowKey={(row) => row.id} />;
}

import type { z } from 'zod';
import { allRoutes } from '@shared/api';
import type { auditEntry } from '@shared/api/people';
import { wallTimeToSecond } from '../../lib/format';
import { Details } from '../../ui/Details';
import { RuledTable, type RuledColumn } from '../../ui/RuledTable';

type AuditEntry = z.infer<typeof auditEntry>;

/** Actions that are no route of ours. */
const SIGN_IN_WORDS: Readonly<Record<string, string>> = { 'auth.signIn': 'Signed in', 'auth.passwordReset': 'Set a new password by mail' };

/** What a route does, as its contract says it, up to the first semicolon. */
const actionWords = (action: string): string =>
  SIGN_IN_WORDS[action] ?? allRoutes.find((route) => route.id === action)?.summary.split(/[;:]/)[0] ?? action;

/** The subject stands first, unless the details name it anyway or it is the person themselves. */
const subjectOnce = ({ action, subject, detail }: AuditEntry): Record<string, unknown> =>
  (action in SIGN_IN_WORDS || Object.values(detail).includes(subject) ? detail : { about: subject, ...detail });

const columns: RuledColumn<AuditEntry>[] = [
  { key: 'at', head: 'Wall time', plain: true, width: '13rem', cell: (row) => wallTimeToSecond(row.at) },
  { key: 'who', head: 'Who', plain: true, width: '12rem', cell: (row) => <span className="font-semibold">{row.who}</span> },
  { key: 'what', head: 'What', lead: true, cell: (row) => <><span>{actionWords(row.action)} <span className="text-small text-soft">{row.action}</span></span><Details detail={subjectOnce(row)} /></> },
];

/** Entries of the audit trail in words, with the routes' own names beside for whoever searches a log. */
export function AuditTable({ caption, entries }: { caption: string; entries: readonly AuditEntry[] }) {
  return <RuledTable caption={caption} columns={columns} rows={entries} rowKey={(row) => String(row.id)} />;
}

/** Rule revisions of studies, and the flags found under them. */
import { sql } from 'drizzle-orm';
import { doublePrecision, index, integer, jsonb, pgTable, text, unique, uuid } from 'drizzle-orm/pg-core';
import type { Cause, Severity } from '@shared/flags';
import { at, id } from './columns';
import { recordings } from './recordings';
import { studies } from './studies';

/** `rules` empty means the default rules of the rig's limits (CONTRACTS of the product). Never changed once written. */
export const ruleRevisions = pgTable('rule_revisions', {
  id: id(),
  studyId: uuid('study_id').notNull().references(() => studies.id),
  revision: integer('revision').notNull(),
  rules: jsonb('rules').$type<Record<string, unknown>>().notNull().default({}),
  createdAt: at('created_at').notNull().defaultNow(),
}, (table) => [unique('rule_revisions_number').on(table.studyId, table.revision)]);

export const flags = pgTable('flags', {
  id: id(),
  recordingId: uuid('recording_id').notNull().references(() => recordings.id, { onDelete: 'cascade' }),
  /** null: found under the default rules, for a recording that belongs to no study yet. */
  ruleRevisionId: uuid('rule_revision_id').references(() => ruleRevisions.id),
  kind: text('kind').$type<'slack' | 'saturation' | 'near-limit' | 'gap' | 'slip' | 'oscillation' | 'unreachable' | 'active' | 'drop'>().notNull(),
  cable: integer('cable'),
  startS: doublePrecision('start_s').notNull(),
  endS: doublePrecision('end_s').notNull(),
  peak: doublePrecision('peak'),
  peakS: doublePrecision('peak_s'),
  severity: text('severity').$type<Severity>(),
  evidence: jsonb('evidence').$type<Record<string, number>>(),
  cause: jsonb('cause').$type<Cause>(),
  /** A later rule revision finds it no more; its verdicts stay in the record. */
  removedAt: at('removed_at'),
  removedByRuleRevisionId: uuid('removed_by_rule_revision_id').references(() => ruleRevisions.id),
}, (table) => [index('flags_recording').on(table.recordingId, table.startS)]);

/** A cause as lists show it, without what its picture needs. */
export const shortCause = sql<Pick<Cause, 'kind' | 'sentence'> | null>`case when ${flags.cause} is null then null else json_build_object('kind', ${flags.cause}->>'kind', 'sentence', ${flags.cause}->>'sentence') end`;

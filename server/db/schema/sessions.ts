/** Sessions (visits), trials, and each session's hash-chained log. */
import { index, integer, jsonb, pgTable, primaryKey, text, unique, uuid } from 'drizzle-orm/pg-core';
import { at, id } from './columns';
import { people } from './people';
import { devices, rigRevisions } from './rigs';
import { conditions, participants, studies, tasks } from './studies';

export const sessions = pgTable('sessions', {
  id: id(),
  studyId: uuid('study_id').notNull().references(() => studies.id),
  participantId: uuid('participant_id').notNull().references(() => participants.id),
  rigRevisionId: uuid('rig_revision_id').notNull().references(() => rigRevisions.id),
  visit: integer('visit').notNull(),
  state: text('state').$type<'planned' | 'open' | 'closed' | 'signed'>().notNull().default('planned'),
  plannedAt: at('planned_at').notNull(),
  createdBy: text('created_by').references(() => people.id),
  createdAt: at('created_at').notNull().defaultNow(),
}, (table) => [
  unique('sessions_visit').on(table.participantId, table.visit),
  index('sessions_study').on(table.studyId, table.plannedAt),
  index('sessions_planned').on(table.plannedAt),
]);

export const trials = pgTable('trials', {
  id: id(),
  sessionId: uuid('session_id').notNull().references(() => sessions.id),
  number: integer('number').notNull(),
  taskId: uuid('task_id').notNull().references(() => tasks.id),
  conditionId: uuid('condition_id').notNull().references(() => conditions.id),
  state: text('state').$type<'planned' | 'armed' | 'recording' | 'away' | 'stopped' | 'judged'>().notNull().default('planned'),
  /** Device it is armed on or was recorded by. */
  deviceId: uuid('device_id').references(() => devices.id),
  outcome: text('outcome').$type<'completed' | 'aborted' | 'void'>(),
  outcomeReason: text('outcome_reason'),
  judgedBy: text('judged_by').references(() => people.id),
  judgedAt: at('judged_at'),
  /** A removed trial reads as absent; its recording stays. */
  removedAt: at('removed_at'),
  createdAt: at('created_at').notNull().defaultNow(),
}, (table) => [unique('trials_number').on(table.sessionId, table.number)]);

/** Append-only; `hash` chains by SHA-256 over canonical JSON of the entry and the hash before it. */
export const logEntries = pgTable('log_entries', {
  sessionId: uuid('session_id').notNull().references(() => sessions.id),
  n: integer('n').notNull(),
  at: at('at').notNull(),
  who: text('who').notNull(),
  what: text('what').notNull(),
  detail: jsonb('detail').$type<Record<string, unknown>>().notNull().default({}),
  hash: text('hash').notNull(),
}, (table) => [primaryKey({ columns: [table.sessionId, table.n] })]);

/** Notes and replies. What was written is never overwritten: each edit is one more version. */
import { type AnyPgColumn, doublePrecision, index, integer, jsonb, pgTable, primaryKey, text, unique, uuid } from 'drizzle-orm/pg-core';
import { at, id } from './columns';
import { people } from './people';
import { trials } from './sessions';

export const notes = pgTable('notes', {
  id: id(),
  trialId: uuid('trial_id').notNull().references(() => trials.id),
  /** A reply points at its note and has no place of its own. */
  replyTo: uuid('reply_to').references((): AnyPgColumn => notes.id),
  authorId: text('author_id').notNull().references(() => people.id),
  /** Made by the writer's client: the same note sent twice is one note. */
  clientKey: uuid('client_key').notNull(),
  startS: doublePrecision('start_s').notNull(),
  endS: doublePrecision('end_s'),
  cables: jsonb('cables').$type<number[]>().notNull().default([]),
  version: integer('version').notNull().default(1),
  resolvedBy: text('resolved_by').references(() => people.id),
  resolvedAt: at('resolved_at'),
  createdAt: at('created_at').notNull().defaultNow(),
}, (table) => [index('notes_trial').on(table.trialId, table.startS), unique('notes_client_key').on(table.authorId, table.clientKey)]);

export const noteVersions = pgTable('note_versions', {
  noteId: uuid('note_id').notNull().references(() => notes.id),
  version: integer('version').notNull(),
  text: text('text').notNull(),
  authorId: text('author_id').notNull().references(() => people.id),
  at: at('at').notNull().defaultNow(),
}, (table) => [primaryKey({ columns: [table.noteId, table.version] })]);

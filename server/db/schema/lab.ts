/** What belongs to the installation: audit trail, mail, settings. */
import { bigserial, index, jsonb, pgTable, text } from 'drizzle-orm/pg-core';
import { at, id } from './columns';

export const auditEntries = pgTable('audit_entries', {
  id: bigserial('id', { mode: 'number' }).primaryKey(),
  at: at('at').notNull().defaultNow(),
  /** Person's id, `device:<id>` or `system`. */
  actor: text('actor').notNull(),
  who: text('who').notNull(),
  action: text('action').notNull(),
  subject: text('subject').notNull(),
  detail: jsonb('detail').$type<Record<string, unknown>>().notNull().default({}),
}, (table) => [index('audit_at').on(table.at)]);

export const mail = pgTable('mail', {
  id: id(),
  recipient: text('recipient').notNull(),
  subject: text('subject').notNull(),
  text: text('text').notNull(),
  html: text('html').notNull(),
  /** outbox: kept here because no SMTP server is set. */
  state: text('state').$type<'outbox' | 'sent' | 'failed'>().notNull(),
  failure: text('failure'),
  createdAt: at('created_at').notNull().defaultNow(),
});

export const settings = pgTable('settings', {
  key: text('key').primaryKey(),
  value: jsonb('value').$type<unknown>().notNull(),
});

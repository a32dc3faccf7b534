/** Rigs, their immutable revisions, and the devices that stream. */
import { integer, jsonb, pgTable, text, unique, uuid } from 'drizzle-orm/pg-core';
import type { RigFile } from '@shared/rig';
import { at, id } from './columns';
import { people } from './people';

export const rigs = pgTable('rigs', {
  id: id(),
  code: text('code').notNull().unique(),
  createdAt: at('created_at').notNull().defaultNow(),
});

/** Rows are only ever inserted: a recording points at its revision for ever. */
export const rigRevisions = pgTable('rig_revisions', {
  id: id(),
  rigId: uuid('rig_id').notNull().references(() => rigs.id),
  revision: integer('revision').notNull(),
  title: text('title').notNull(),
  remark: text('remark').notNull().default(''),
  file: jsonb('file').$type<RigFile>().notNull(),
  digest: text('digest').notNull(),
  importedBy: text('imported_by').references(() => people.id),
  importedAt: at('imported_at').notNull().defaultNow(),
}, (table) => [unique('rig_revisions_number').on(table.rigId, table.revision)]);

export const devices = pgTable('devices', {
  id: id(),
  name: text('name').notNull(),
  rigId: uuid('rig_id').notNull().references(() => rigs.id),
  /** SHA-256 of the key, hex; keys are 256 random bits, so no salt is needed. */
  keyHash: text('key_hash').notNull().unique(),
  keyHint: text('key_hint').notNull(),
  faults: jsonb('faults').$type<Record<string, number>>().notNull().default({}),
  /** Latest clock estimate: device clock minus server clock and its bound, µs. */
  clock: jsonb('clock').$type<{ offsetUs: number; uncertaintyUs: number; driftPpm: number | null } | null>(),
  lastSeenAt: at('last_seen_at'),
  createdAt: at('created_at').notNull().defaultNow(),
  revokedAt: at('revoked_at'),
});

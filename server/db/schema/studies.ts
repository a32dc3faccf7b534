/** Studies: conditions, tasks, members, participants. */
import { boolean, doublePrecision, integer, pgTable, primaryKey, text, unique, uuid } from 'drizzle-orm/pg-core';
import { at, id } from './columns';
import { people } from './people';

export const studies = pgTable('studies', {
  id: id(),
  code: text('code').notNull().unique(),
  title: text('title').notNull(),
  protocol: text('protocol').notNull().default(''),
  state: text('state').$type<'draft' | 'running' | 'closed' | 'archived'>().notNull().default('draft'),
  createdBy: text('created_by').references(() => people.id),
  createdAt: at('created_at').notNull().defaultNow(),
});

export const conditions = pgTable('conditions', {
  id: id(),
  studyId: uuid('study_id').notNull().references(() => studies.id),
  place: integer('place').notNull(),
  blindCode: text('blind_code').notNull(),
  label: text('label').notNull(),
}, (table) => [unique('conditions_code').on(table.studyId, table.blindCode)]);

export const tasks = pgTable('tasks', {
  id: id(),
  studyId: uuid('study_id').notNull().references(() => studies.id),
  place: integer('place').notNull(),
  code: text('code').notNull(),
  title: text('title').notNull(),
  timeLimitS: doublePrecision('time_limit_s'),
}, (table) => [unique('tasks_code').on(table.studyId, table.code)]);

export const members = pgTable('members', {
  studyId: uuid('study_id').notNull().references(() => studies.id),
  personId: text('person_id').notNull().references(() => people.id),
  role: text('role').$type<'lead' | 'operator' | 'clinician' | 'reader'>().notNull(),
  blind: boolean('blind').notNull().default(false),
  since: at('since').notNull().defaultNow(),
}, (table) => [primaryKey({ columns: [table.studyId, table.personId] })]);

export const participants = pgTable('participants', {
  id: id(),
  studyId: uuid('study_id').notNull().references(() => studies.id),
  code: text('code').notNull(),
  hand: text('hand').$type<'left' | 'right' | 'both'>().notNull().default('right'),
  createdAt: at('created_at').notNull().defaultNow(),
}, (table) => [unique('participants_code').on(table.studyId, table.code)]);

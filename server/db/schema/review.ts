/** Verdicts on flags. A later one supersedes; none is changed or removed. */
import { index, pgTable, text, uuid } from 'drizzle-orm/pg-core';
import { at, id } from './columns';
import { flags } from './flags';
import { people } from './people';

export const verdicts = pgTable('verdicts', {
  id: id(),
  flagId: uuid('flag_id').notNull().references(() => flags.id, { onDelete: 'cascade' }),
  authorId: text('author_id').notNull().references(() => people.id),
  value: text('value').$type<'confirmed' | 'dismissed' | 'unsure' | 'withdrawn'>().notNull(),
  reason: text('reason').notNull().default(''),
  at: at('at').notNull(),
}, (table) => [index('verdicts_flag').on(table.flagId, table.id)]);

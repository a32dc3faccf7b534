import { desc, lt } from 'drizzle-orm';
import type { Database } from '../../db/engine';
import { auditEntries } from '../../db/schema';

export function auditPage(db: Database, before: number | undefined, limit: number) {
  return db.select().from(auditEntries)
    .where(before === undefined ? undefined : lt(auditEntries.id, before))
    .orderBy(desc(auditEntries.id)).limit(limit);
}

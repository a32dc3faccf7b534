import { desc } from 'drizzle-orm';
import type { Database } from '../db/engine';
import { mail } from '../db/schema';

export type MailRow = typeof mail.$inferSelect;

export async function keepMail(db: Database, letter: typeof mail.$inferInsert): Promise<void> {
  await db.insert(mail).values(letter);
}

export function latestMail(db: Database, limit: number): Promise<MailRow[]> {
  return db.select().from(mail).orderBy(desc(mail.createdAt), desc(mail.id)).limit(limit);
}

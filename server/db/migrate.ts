/** Brings a database to this version's tables, and refuses one that a newer version wrote. */
import { createHash } from 'node:crypto';
import { fileURLToPath } from 'node:url';
import { sql } from 'drizzle-orm';
import { readMigrationFiles } from 'drizzle-orm/migrator';
import type { PgDatabase, PgQueryResultHKT } from 'drizzle-orm/pg-core';
import type * as schema from './schema';
import { StartRefusal } from '../start-refusal';

export type Database = PgDatabase<PgQueryResultHKT, typeof schema>;

export const migrationsFolder = fileURLToPath(new URL('../../drizzle', import.meta.url));
const known = () => readMigrationFiles({ migrationsFolder });

/** Changes whenever a migration is added or edited. */
export function migrationsDigest(): string {
  const hash = createHash('sha256');
  for (const migration of known()) hash.update(migration.hash);
  return hash.digest('hex').slice(0, 16);
}

/** Both engines answer `execute` with an object that holds `rows`; drizzle's common type does not say so. */
async function rowsOf<T>(db: Database, query: ReturnType<typeof sql>): Promise<T[]> {
  return ((await db.execute(query)) as unknown as { rows: T[] }).rows;
}

/** @throws StartRefusal DATA_NEWER */
export async function refuseNewerData(db: Database): Promise<void> {
  const [table] = await rowsOf<{ found: boolean }>(db, sql`select to_regclass('drizzle.__drizzle_migrations') is not null as found`);
  if (!table?.found) return;
  const [latest] = await rowsOf<{ at: string | number | null }>(db, sql`select max(created_at) as at from drizzle.__drizzle_migrations`);
  const newestKnown = Math.max(...known().map((migration) => migration.folderMillis));
  if (latest?.at === null || latest === undefined || Number(latest.at) <= newestKnown) return;
  throw newerData();
}

export const newerData = () => new StartRefusal(
  'DATA_NEWER',
  'These data were written by a newer version of Tautbook than this one.',
  'Start the newer version, or choose another data directory with DATA_DIR (or another DATABASE_URL).',
);

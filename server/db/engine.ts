/**
 * The database: embedded (PGlite) by default, an existing PostgreSQL when a `databaseUrl` is given. One schema, one
 * `Database` type for both.
 *
 * The embedded engine is one connection: inside `db.transaction(async (tx) => ...)` only `tx` may be used, a query on
 * `db` in there would wait for ever.
 */
import { existsSync, readFileSync, renameSync, rmSync } from 'node:fs';
import { join } from 'node:path';
import { PGlite } from '@electric-sql/pglite';
import { drizzle as drizzleNodePostgres } from 'drizzle-orm/node-postgres';
import { migrate as migrateNodePostgres } from 'drizzle-orm/node-postgres/migrator';
import { drizzle as drizzlePglite } from 'drizzle-orm/pglite';
import { migrate as migratePglite } from 'drizzle-orm/pglite/migrator';
import pg from 'pg';
import { StartRefusal } from '../start-refusal';
import { lockDataDirectory, refusalOf } from './data-lock';
import { binaryBytes } from './embedded/binary-bytes';
import { EmbeddedThread } from './embedded/thread';
import { type Database, migrationsFolder, newerData, refuseNewerData } from './migrate';
import * as schema from './schema';

export type { Database } from './migrate';

export interface OpenDatabase {
  db: Database;
  kind: 'pglite' | 'postgresql';
  /** @throws StartRefusal DATA_NEWER */
  migrate(): Promise<void>;
  /** A database in memory as one archive, for snapshots; null for others. */
  dump(): Promise<Blob | null>;
  close(): Promise<void>;
}

export interface DatabasePlace {
  /** Absolute path; holds the embedded database and files. */
  dataDir: string;
  databaseUrl?: string | undefined;
  /** Embedded database in memory, for tests and one-shot commands; optionally from an archive that `dump` made. */
  memory?: boolean | Blob;
}

/** Any number; the same in every version, so that servers that start together migrate one after another. */
const migrationLock = 4_680_001;

/** @throws StartRefusal DATA_READ_ONLY, DATA_FULL, DATA_IN_USE, DATA_NEWER, DATA_DAMAGED, DATABASE_GONE */
export async function openDatabase(place: DatabasePlace): Promise<OpenDatabase> {
  if (place.memory) {
    const client = await PGlite.create({ ...binaryBytes, ...(place.memory instanceof Blob ? { loadDataDir: place.memory } : {}) });
    return embedded(client, () => client.dumpDataDir('none'), () => undefined);
  }
  if (place.databaseUrl !== undefined) return openPostgres(place.databaseUrl);
  const unlock = lockDataDirectory(place.dataDir);
  try {
    const thread = await openOnDisk(place.dataDir);
    // Drizzle asks nothing of its client but these calls.
    return embedded(thread as unknown as PGlite, async () => null, unlock);
  } catch (error) {
    unlock();
    throw error instanceof StartRefusal ? error : whyNotOpen(place.dataDir, error);
  }
}

async function openOnDisk(dataDir: string): Promise<EmbeddedThread> {
  const directory = join(dataDir, 'database');
  if (!existsSync(directory)) {
    // Made beside and moved in whole: a first start that is killed halfway leaves nothing that looks like a database.
    const unfinished = join(dataDir, 'database.unfinished');
    rmSync(unfinished, { recursive: true, force: true });
    const made = await EmbeddedThread.open(unfinished);
    await made.close();
    renameSync(unfinished, directory);
  }
  refuseNewerEngine(directory);
  return EmbeddedThread.open(directory);
}

/** Major version of the PostgreSQL inside; every data directory of one names its own. */
const engineVersion = 18;

function refuseNewerEngine(directory: string): void {
  const found = Number(readFileSync(join(directory, 'PG_VERSION'), 'utf8'));
  if (found > engineVersion) throw newerData();
}

/** In the numbers of the system interface that the engine is compiled to (WASI); others are Node's codes. */
const wasiNoSpace = 51;

function whyNotOpen(dataDir: string, error: unknown): StartRefusal {
  const known = refusalOf(dataDir, (error as { errno?: number }).errno === wasiNoSpace ? Object.assign(new Error('no space'), { code: 'ENOSPC' }) : error);
  return known ?? new StartRefusal('DATA_DAMAGED', `The database in ${join(dataDir, 'database')} cannot be opened; it may be damaged.`, 'Put the last backup in its place, or choose another data directory with DATA_DIR.', { cause: error });
}

function embedded(client: PGlite, dump: OpenDatabase['dump'], unlock: () => void): OpenDatabase {
  const inner = drizzlePglite(client, { schema });
  // Both engines derive from one class; only the type of raw results differs, and raw results are not used.
  const db = inner as unknown as Database;
  return {
    db,
    kind: 'pglite',
    async migrate() {
      await refuseNewerData(db);
      await migratePglite(inner, { migrationsFolder });
    },
    dump,
    async close() {
      await client.close();
      unlock();
    },
  };
}

async function openPostgres(databaseUrl: string): Promise<OpenDatabase> {
  const pool = new pg.Pool({ connectionString: databaseUrl, max: 10 });
  // An idle connection that the server closes is replaced at the next query; without a listener it would end the process.
  pool.on('error', () => undefined);
  try {
    await pool.query('select 1');
  } catch (error) {
    await pool.end();
    throw new StartRefusal('DATABASE_GONE', 'The PostgreSQL server of DATABASE_URL does not answer or refuses the sign-in.', 'Check DATABASE_URL and that the server runs, or unset it to use the embedded database.', { cause: error });
  }
  const inner = drizzleNodePostgres(pool, { schema });
  const db = inner as unknown as Database;
  return {
    db,
    kind: 'postgresql',
    async migrate() {
      await refuseNewerData(db);
      const holder = await pool.connect();
      try {
        await holder.query('select pg_advisory_lock($1)', [migrationLock]);
        await migrateNodePostgres(inner, { migrationsFolder });
      } finally {
        await holder.query('select pg_advisory_unlock($1)', [migrationLock]).catch(() => undefined);
        holder.release();
      }
    },
    dump: async () => null,
    close: () => pool.end(),
  };
}

/**
 * A fresh, migrated database for one test file.
 *
 * Embedded: loaded from a snapshot that is made once per set of migrations (initdb takes seconds, loading about one).
 * With TEST_DATABASE_URL (a PostgreSQL on which databases may be created): a database of its own, dropped at close.
 */
import { mkdirSync, readFileSync, renameSync, writeFileSync } from 'node:fs';
import { randomUUID } from 'node:crypto';
import { fileURLToPath } from 'node:url';
import { type SQL, sql } from 'drizzle-orm';
import pg from 'pg';
import { type Database, openDatabase, type OpenDatabase } from '@server/db/engine';
import { migrationsDigest } from '@server/db/migrate';

const cache = fileURLToPath(new URL('../../node_modules/.cache/tautbook', import.meta.url));

export async function testDatabase(): Promise<OpenDatabase> {
  const server = process.env['TEST_DATABASE_URL'];
  return server ? onPostgres(server) : openDatabase({ dataDir: '', memory: await migratedSnapshot() });
}

async function migratedSnapshot(): Promise<Blob> {
  const file = `${cache}/database-${migrationsDigest()}.tar`;
  try {
    return new Blob([readFileSync(file)]);
  } catch {
    const made = await openDatabase({ dataDir: '', memory: true });
    await made.migrate();
    const archive = await made.dump();
    await made.close();
    if (archive === null) throw new Error('The embedded database gave no archive');
    mkdirSync(cache, { recursive: true });
    const unfinished = `${file}.${randomUUID()}`;
    writeFileSync(unfinished, new Uint8Array(await archive.arrayBuffer()));
    renameSync(unfinished, file);
    return archive;
  }
}

async function onPostgres(server: string): Promise<OpenDatabase> {
  const name = `tautbook_test_${randomUUID().replaceAll('-', '')}`;
  const asOwner = async (statement: string) => {
    const client = new pg.Client({ connectionString: server });
    await client.connect();
    await client.query(statement);
    await client.end();
  };
  await asOwner(`create database ${name}`);
  const url = new URL(server);
  url.pathname = `/${name}`;
  const open = await openDatabase({ dataDir: '', databaseUrl: url.href });
  await open.migrate();
  return {
    ...open,
    close: async () => {
      await open.close();
      await asOwner(`drop database ${name} with (force)`);
    },
  };
}

/** Everything that is stored, but for some tables, as one digest a table: to show that something changed nothing. */
export async function contentsOf(db: Database, but: readonly string[] = []): Promise<Record<string, string>> {
  const rowsOf = async (query: SQL) => ((await db.execute(query)) as unknown as { rows: { name: string; digest: string }[] }).rows;
  const tables = await rowsOf(sql`select table_name as name from information_schema.tables where table_schema = 'public' order by 1`);
  const digests = tables.filter(({ name }) => !but.includes(name))
    .map(({ name }) => sql`select ${sql.raw(`'${name}'`)} as name, md5(string_agg(t::text, '|' order by t::text)) as digest from ${sql.identifier(name)} t`);
  return Object.fromEntries((await rowsOf(sql.join(digests, sql` union all `))).map(({ name, digest }) => [name, digest]));
}

import { asc, desc, eq, sql } from 'drizzle-orm';
import type { RigFile } from '@shared/rig';
import type { Database } from '../../db/engine';
import { people, rigRevisions, rigs } from '../../db/schema';

const revisionColumns = {
  id: rigRevisions.id, rigId: rigRevisions.rigId, code: rigs.code, title: rigRevisions.title, revision: rigRevisions.revision, remark: rigRevisions.remark,
  digest: rigRevisions.digest, importedBy: people.name, importedAt: rigRevisions.importedAt, file: rigRevisions.file,
};

const revisions = (db: Database) => db.select(revisionColumns).from(rigRevisions)
  .innerJoin(rigs, eq(rigs.id, rigRevisions.rigId)).leftJoin(people, eq(people.id, rigRevisions.importedBy));

export type RevisionRow = Awaited<ReturnType<typeof revisionsOf>>[number];

export const revisionsOf = (db: Database, rigId: string) => revisions(db).where(eq(rigRevisions.rigId, rigId)).orderBy(desc(rigRevisions.revision));

export async function findRevision(db: Database, id: string): Promise<RevisionRow | null> {
  const [row] = await revisions(db).where(eq(rigRevisions.id, id));
  return row ?? null;
}

/** Every rig with its newest revision. */
export const latestRevisions = (db: Database) => revisions(db)
  .where(eq(rigRevisions.revision, sql`(select max(r.revision) from rig_revisions r where r.rig_id = ${rigRevisions.rigId})`))
  .orderBy(asc(rigs.code));

/** The rig with this code, made when it is new, and held until the transaction ends so that its next number is ours. */
export async function holdRig(tx: Database, code: string): Promise<string> {
  await tx.insert(rigs).values({ code }).onConflictDoNothing();
  const [row] = await tx.select({ id: rigs.id }).from(rigs).where(eq(rigs.code, code)).for('update');
  if (!row) throw new Error('A rig that was just made is gone');
  return row.id;
}

export interface NewRevision {
  rigId: string;
  revision: number;
  title: string;
  remark: string;
  file: RigFile;
  digest: string;
  importedBy: string | null;
}

export async function insertRevision(tx: Database, values: NewRevision): Promise<string> {
  const [row] = await tx.insert(rigRevisions).values(values).returning({ id: rigRevisions.id });
  if (!row) throw new Error('The revision was not written');
  return row.id;
}

/** Rigs and their revisions, which never change once imported. */
import { createHash } from 'node:crypto';
import { rigId, rigRevisionId } from '@shared/api/common';
import type { ResponseOf } from '@shared/api/contract';
import type { getRig, RigRevision, RigSummary } from '@shared/api/rigs';
import { checkRig, type RigFile, rigFileSchema } from '@shared/rig';
import { canonicalJson } from '@shared/trust';
import type { SignedIn } from '../../auth';
import type { Database } from '../../db/engine';
import { refuse } from './errors';
import { findRevision, holdRig, insertRevision, latestRevisions, type RevisionRow, revisionsOf } from './queries';

const toRevision = (row: RevisionRow): RigRevision => ({
  ...row,
  id: rigRevisionId.parse(row.id),
  rigId: rigId.parse(row.rigId),
  cableCount: row.file.cables.length,
  importedBy: row.importedBy ?? 'the installation',
  importedAt: row.importedAt.toISOString(),
});

const toSummary = (latest: RevisionRow): RigSummary => ({
  id: rigId.parse(latest.rigId), code: latest.code, title: latest.title, cableCount: latest.file.cables.length,
  revisions: latest.revision, latest: rigRevisionId.parse(latest.id),
});

/** @throws Refusal RIG_FAULTS with every fault found */
function readRigFile(input: unknown): RigFile {
  const faults = checkRig(input);
  if (faults.length > 0) throw refuse('RIG_FAULTS', {}, faults);
  return rigFileSchema.parse(input);
}

export type RigService = ReturnType<typeof createRigService>;

export function createRigService(db: Database) {
  return {
    async list(): Promise<RigSummary[]> {
      return (await latestRevisions(db)).map(toSummary);
    },

    async get(id: string): Promise<ResponseOf<typeof getRig>> {
      const rows = await revisionsOf(db, id);
      const [latest] = rows;
      if (!latest) throw refuse('RIG_UNKNOWN');
      return { rig: toSummary(latest), revisions: rows.map(toRevision) };
    },

    async getRevision(id: string): Promise<RigRevision> {
      const row = await findRevision(db, id);
      if (row === null) throw refuse('RIG_REVISION_UNKNOWN');
      return toRevision(row);
    },

    /** @param by null: the installation itself, for the demo lab */
    async import(input: unknown, remark: string, by: SignedIn | null): Promise<RigRevision> {
      const file = readRigFile(input);
      const digest = createHash('sha256').update(canonicalJson(file)).digest('hex');
      const id = await db.transaction(async (tx) => {
        const rig = await holdRig(tx, file.code);
        const earlier = await revisionsOf(tx, rig);
        const same = earlier.find((revision) => revision.digest === digest);
        if (same) throw refuse('RIG_SAME', { revision: same.revision, code: same.code });
        return insertRevision(tx, {
          rigId: rig, revision: (earlier[0]?.revision ?? 0) + 1, title: file.title, remark, file, digest, importedBy: by?.id ?? null,
        });
      });
      return this.getRevision(id);
    },
  };
}

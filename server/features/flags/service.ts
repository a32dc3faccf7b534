/** Flags of a trial's recording, once it is whole and was looked through, with how they were judged. */
import { flagId } from '@shared/api/common';
import type { ResponseOf } from '@shared/api/contract';
import type { listFlags } from '@shared/api/sessions';
import type { Database } from '../../db/engine';
import type { ReviewService } from '../review';
import { findSearchState, flagsOf } from './queries';

export type FlagService = ReturnType<typeof createFlagService>;

export function createFlagService(db: Database, review: Pick<ReviewService, 'standing'>) {
  return {
    async list(trialId: string): Promise<ResponseOf<typeof listFlags>> {
      const recording = await findSearchState(db, trialId);
      if (recording === null || recording.state === 'growing') return { state: 'growing', flags: [] };
      if (recording.flagsFoundAt === null) return { state: 'pending', flags: [] };
      const rows = await flagsOf(db, recording.id);
      const standing = await review.standing(rows.map(({ id }) => id));
      return { state: 'found', flags: rows.map((row) => ({ ...row, id: flagId.parse(row.id), ...(standing.get(row.id) ?? { verdict: null, seen: null }) })) };
    },
  };
}

/** What a judge does: one verdict or many, and taking the last ones back. */
import { useRef, useState } from 'react';
import type { StudyId } from '@shared/api/common';
import type { Moment } from '@shared/api/review';
import type { VerdictValue } from '@shared/api/verdict';
import { useGiveVerdicts } from './queries';

/** The server takes so many at once. */
const MOST_AT_ONCE = 500;

interface Batch {
  readonly flagIds: readonly string[];
}

export interface Judging {
  /** Ids whose verdict is on its way. */
  readonly pending: ReadonlySet<string>;
  readonly error: unknown;
  /** How many batches can be taken back. */
  readonly done: number;
  judge(moments: readonly Moment[], value: VerdictValue, reason: string): Promise<boolean>;
  takeBack(moments: readonly Moment[]): Promise<boolean>;
  clearError(): void;
}

export function useJudging(studyId: StudyId): Judging {
  const give = useGiveVerdicts(studyId);
  const [pending, setPending] = useState<ReadonlySet<string>>(new Set());
  const [batches, setBatches] = useState<readonly Batch[]>([]);
  const [error, setError] = useState<unknown>(null);
  const counted = useRef(0);

  /** Batches go one after another; those that were written before one fails stay written. */
  const send = async (moments: readonly Moment[], value: VerdictValue | 'withdrawn', reason: string): Promise<string[]> => {
    counted.current += 1;
    setError(null);
    setPending((before) => new Set([...before, ...moments.map(({ id }) => id)]));
    const written: string[] = [];
    try {
      for (let from = 0; from < moments.length; from += MOST_AT_ONCE) {
        const part = moments.slice(from, from + MOST_AT_ONCE);
        await give.mutateAsync(part.map(({ id, seen }) => ({ flagId: id, value, reason, seen })));
        written.push(...part.map(({ id }) => id));
      }
    } catch (thrown) {
      setError(thrown);
    } finally {
      setPending((before) => new Set([...before].filter((id) => !moments.some((moment) => moment.id === id))));
    }
    return written;
  };

  return {
    pending,
    error,
    done: batches.length,
    async judge(moments, value, reason) {
      const written = await send(moments, value, reason);
      if (written.length > 0) setBatches((before) => [...before, { flagIds: written }]);
      return written.length === moments.length;
    },
    async takeBack(moments) {
      const last = batches.at(-1);
      if (!last) return false;
      const theirs = new Set(last.flagIds);
      const written = await send(moments.filter(({ id }) => theirs.has(id)), 'withdrawn', '');
      setBatches((before) => before.filter((batch) => batch !== last));
      return written.length > 0;
    },
    clearError: () => setError(null),
  };
}

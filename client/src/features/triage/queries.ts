import { queryOptions, useMutation, useQueryClient } from '@tanstack/react-query';
import type { RecordingId, StudyId } from '@shared/api/common';
import type { BodyInput, ResponseOf } from '@shared/api/contract';
import { giveVerdicts, listMoments, type Moment } from '@shared/api/review';
import { call } from '../../lib/api';
import { loadWindow } from '../../replay/recording-source';
import type { Span } from '../../replay/span';

export const momentsQuery = (studyId: StudyId) => queryOptions({
  queryKey: ['study', studyId, 'moments'],
  queryFn: async ({ signal }) => (await call(listMoments, { params: { studyId }, signal })).moments,
});

/** The stretch that a strip shows. A closed recording never changes; few strips are kept once out of sight. */
export const stripQuery = (recordingId: RecordingId, channelCount: number, span: Span) => queryOptions({
  queryKey: ['strip', recordingId, span.fromS, span.toS],
  queryFn: ({ signal }) => loadWindow(recordingId, channelCount)(span, STRIP_BUCKETS, signal),
  staleTime: Infinity,
  gcTime: 30_000,
});
/** So many samples come as they are; a longer strip comes as bands. */
const STRIP_BUCKETS = 1200;

type Given = ResponseOf<typeof giveVerdicts>['verdicts'];

/** Puts what the server answered where the flags stand in the list. */
export const withVerdicts = (moments: readonly Moment[], given: Given): Moment[] => {
  const byFlag = new Map(given.map((each) => [each.flagId, each]));
  return moments.map((moment) => {
    const now = byFlag.get(moment.id);
    return now ? { ...moment, verdict: now.verdict, seen: now.seen } : moment;
  });
};

export function useGiveVerdicts(studyId: StudyId) {
  const queries = useQueryClient();
  const { queryKey } = momentsQuery(studyId);
  return useMutation({
    mutationFn: (verdicts: BodyInput<typeof giveVerdicts>['verdicts']) => call(giveVerdicts, { params: { studyId }, body: { verdicts } }),
    onSuccess: ({ verdicts }) => {
      queries.setQueryData(queryKey, (moments) => withVerdicts(moments ?? [], verdicts));
    },
    // Somebody was there first, or a trial was taken out: what stands now is what the reader must see.
    onError: () => void queries.invalidateQueries({ queryKey }),
  });
}

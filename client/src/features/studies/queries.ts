import { queryOptions, useMutation, useQueryClient } from '@tanstack/react-query';
import type { PersonId, StudyId } from '@shared/api/common';
import type { BodyInput } from '@shared/api/contract';
import {
  addParticipant, changeStudy, createStudy, getStudy, joinStudy, listAllStudies, listCandidates, listParticipants, listStudies, removeMember, setMember,
} from '@shared/api/studies';
import { call } from '../../lib/api';

export const studiesQuery = queryOptions({ queryKey: ['studies'], queryFn: async ({ signal }) => (await call(listStudies, { signal })).studies });

export const allStudiesQuery = queryOptions({ queryKey: ['studies', 'all'], queryFn: async ({ signal }) => (await call(listAllStudies, { signal })).studies });

export const studyQuery = (studyId: StudyId) => queryOptions({ queryKey: ['study', studyId], queryFn: ({ signal }) => call(getStudy, { params: { studyId }, signal }) });

export const participantsQuery = (studyId: StudyId) => queryOptions({
  queryKey: ['study', studyId, 'participants'],
  queryFn: async ({ signal }) => (await call(listParticipants, { params: { studyId }, signal })).participants,
});

export const candidatesQuery = (studyId: StudyId) => queryOptions({
  queryKey: ['study', studyId, 'candidates'],
  queryFn: async ({ signal }) => (await call(listCandidates, { params: { studyId }, signal })).people,
});

/** Membership decides what shows where, so a change of it asks for all of it again. */
function useStale() {
  const queries = useQueryClient();
  return () => Promise.all([['study'], ['studies'], ['me'], ['today']].map((queryKey) => queries.invalidateQueries({ queryKey })));
}

export function useCreateStudy() {
  const onSuccess = useStale();
  return useMutation({ mutationFn: (body: BodyInput<typeof createStudy>) => call(createStudy, { body }), onSuccess });
}

export function useChangeStudy(studyId: StudyId) {
  const onSuccess = useStale();
  return useMutation({ mutationFn: (body: BodyInput<typeof changeStudy>) => call(changeStudy, { params: { studyId }, body }), onSuccess });
}

export function useAddParticipant(studyId: StudyId) {
  const onSuccess = useStale();
  return useMutation({ mutationFn: (body: BodyInput<typeof addParticipant>) => call(addParticipant, { params: { studyId }, body }), onSuccess });
}

export function useSetMember(studyId: StudyId) {
  const onSuccess = useStale();
  return useMutation({
    mutationFn: ({ personId, ...body }: BodyInput<typeof setMember> & { personId: PersonId }) => call(setMember, { params: { studyId, personId }, body }),
    onSuccess,
  });
}

export function useRemoveMember(studyId: StudyId) {
  const onSuccess = useStale();
  return useMutation({ mutationFn: (personId: PersonId) => call(removeMember, { params: { studyId, personId } }), onSuccess });
}

export function useJoinStudy() {
  const onSuccess = useStale();
  return useMutation({ mutationFn: (studyId: StudyId) => call(joinStudy, { params: { studyId } }), onSuccess });
}

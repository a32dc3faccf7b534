import { queryOptions, useMutation, useQueryClient } from '@tanstack/react-query';
import type { SessionId, StudyId, TrialId } from '@shared/api/common';
import type { BodyInput } from '@shared/api/contract';
import { addTrial, closeSession, getSession, getSessionLog, judgeTrial, listSessions, planSession, removeTrial } from '@shared/api/sessions';
import { call } from '../../lib/api';

export const sessionQuery = (sessionId: SessionId) => queryOptions({
  queryKey: ['session', sessionId],
  queryFn: ({ signal }) => call(getSession, { params: { sessionId }, signal }),
});

export const sessionLogQuery = (sessionId: SessionId) => queryOptions({
  queryKey: ['session', sessionId, 'log'],
  queryFn: ({ signal }) => call(getSessionLog, { params: { sessionId }, signal }),
});

export const studySessionsQuery = (studyId: StudyId) => queryOptions({
  queryKey: ['study', studyId, 'sessions'],
  queryFn: async ({ signal }) => (await call(listSessions, { params: { studyId }, signal })).sessions,
});

/** What a change of a session or its trials makes stale: the session, its trials, the study's counts and Today. */
function useStale() {
  const queries = useQueryClient();
  return () => Promise.all([['session'], ['trial'], ['study'], ['studies'], ['today']].map((queryKey) => queries.invalidateQueries({ queryKey })));
}

export function usePlanSession(studyId: StudyId) {
  const onSuccess = useStale();
  return useMutation({ mutationFn: (body: BodyInput<typeof planSession>) => call(planSession, { params: { studyId }, body }), onSuccess });
}

export function useCloseSession(sessionId: SessionId) {
  const onSuccess = useStale();
  return useMutation({ mutationFn: () => call(closeSession, { params: { sessionId } }), onSuccess });
}

export function useAddTrial(sessionId: SessionId) {
  const onSuccess = useStale();
  return useMutation({ mutationFn: (body: BodyInput<typeof addTrial>) => call(addTrial, { params: { sessionId }, body }), onSuccess });
}

export function useJudgeTrial(trialId: TrialId) {
  const onSuccess = useStale();
  return useMutation({ mutationFn: (body: BodyInput<typeof judgeTrial>) => call(judgeTrial, { params: { trialId }, body }), onSuccess });
}

export function useRemoveTrial(trialId: TrialId) {
  const onSuccess = useStale();
  return useMutation({ mutationFn: (reason: string) => call(removeTrial, { params: { trialId }, body: { reason } }), onSuccess });
}

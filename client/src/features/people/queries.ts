import { infiniteQueryOptions, queryOptions, useMutation, useQueryClient } from '@tanstack/react-query';
import type { PersonId } from '@shared/api/common';
import type { BodyInput } from '@shared/api/contract';
import { changePerson, invitePerson, listAudit, listPeople } from '@shared/api/people';
import { call } from '../../lib/api';

/** Asked again at every turn to the page: people accept invitations and set passwords elsewhere. */
export const peopleQuery = queryOptions({ queryKey: ['people'], queryFn: async ({ signal }) => (await call(listPeople, { signal })).people, staleTime: 0 });

const ENTRIES_A_PAGE = 100;

/** The audit trail, newest first, page after page. */
export const auditQuery = infiniteQueryOptions({
  queryKey: ['audit'],
  queryFn: async ({ pageParam, signal }) => (await call(listAudit, { query: { before: pageParam, limit: ENTRIES_A_PAGE }, signal })).entries,
  initialPageParam: undefined as number | undefined,
  getNextPageParam: (last) => (last.length < ENTRIES_A_PAGE ? undefined : last.at(-1)?.id),
});

const LATEST = 6;

/** The newest few entries. */
export const latestAuditQuery = queryOptions({ queryKey: ['audit', 'latest'], queryFn: async ({ signal }) => (await call(listAudit, { query: { limit: LATEST }, signal })).entries, staleTime: 0 });

export function useInvitePerson() {
  const queries = useQueryClient();
  return useMutation({
    mutationFn: (body: BodyInput<typeof invitePerson>) => call(invitePerson, { body }),
    onSuccess: () => Promise.all([queries.invalidateQueries({ queryKey: ['people'] }), queries.invalidateQueries({ queryKey: ['outbox'] })]),
  });
}

export function useChangePerson() {
  const queries = useQueryClient();
  return useMutation({
    mutationFn: ({ personId, ...body }: BodyInput<typeof changePerson> & { personId: PersonId }) => call(changePerson, { params: { personId }, body }),
    onSuccess: () => Promise.all([queries.invalidateQueries({ queryKey: ['people'] }), queries.invalidateQueries({ queryKey: ['me'] })]),
  });
}

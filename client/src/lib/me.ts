/** Who is signed in. Asked once, kept until somebody signs in or out. */
import { queryOptions, useQuery, useSuspenseQuery } from '@tanstack/react-query';
import { getEntrance, getMe, type Me } from '@shared/api/people';
import type { StudyId } from '@shared/api/common';
import { call } from './api';

export const meQuery = queryOptions({ queryKey: ['me'], queryFn: ({ signal }) => call(getMe, { signal }), staleTime: 5 * 60_000 });

export const entranceQuery = queryOptions({ queryKey: ['entrance'], queryFn: ({ signal }) => call(getEntrance, { signal }), staleTime: 60_000 });

/** The reader, inside pages that only a signed-in person reaches. */
export const useMe = (): Me => useSuspenseQuery(meQuery).data;

/** The reader's role in a study; undefined when they are not a member. */
export function useMyRoleIn(studyId: StudyId | undefined) {
  const me = useQuery(meQuery).data;
  return me?.memberships.find((membership) => membership.studyId === studyId);
}

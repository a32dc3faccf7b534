import { queryOptions, useMutation, useQueryClient } from '@tanstack/react-query';
import type { RigId, RigRevisionId } from '@shared/api/common';
import type { BodyInput } from '@shared/api/contract';
import { getRig, getRigRevision, importRig, listRigs } from '@shared/api/rigs';
import { call } from '../../lib/api';

export const rigsQuery = queryOptions({ queryKey: ['rigs'], queryFn: async ({ signal }) => (await call(listRigs, { signal })).rigs });

/** All revisions come with it; none of them ever changes. */
export const rigQuery = (rigId: RigId) => queryOptions({ queryKey: ['rigs', rigId], queryFn: ({ signal }) => call(getRig, { params: { rigId }, signal }) });

/** A revision never changes: once read it is known. */
export const rigRevisionQuery = (rigRevisionId: RigRevisionId) => queryOptions({
  queryKey: ['rig-revision', rigRevisionId],
  queryFn: ({ signal }) => call(getRigRevision, { params: { rigRevisionId }, signal }),
  staleTime: Infinity,
});

export function useImportRig() {
  const queries = useQueryClient();
  return useMutation({
    mutationFn: (body: BodyInput<typeof importRig>) => call(importRig, { body }),
    onSuccess: () => queries.invalidateQueries({ queryKey: ['rigs'] }),
  });
}

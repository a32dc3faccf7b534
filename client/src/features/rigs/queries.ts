import { queryOptions, useMutation, useQueryClient } from '@tanstack/react-query';
import type { RigId } from '@shared/api/common';
import type { BodyInput } from '@shared/api/contract';
import { getRig, importRig, listRigs } from '@shared/api/rigs';
import { call } from '../../lib/api';

export const rigsQuery = queryOptions({ queryKey: ['rigs'], queryFn: async ({ signal }) => (await call(listRigs, { signal })).rigs });

/** All revisions come with it; none of them ever changes. */
export const rigQuery = (rigId: RigId) => queryOptions({ queryKey: ['rigs', rigId], queryFn: ({ signal }) => call(getRig, { params: { rigId }, signal }) });

export function useImportRig() {
  const queries = useQueryClient();
  return useMutation({
    mutationFn: (body: BodyInput<typeof importRig>) => call(importRig, { body }),
    onSuccess: () => queries.invalidateQueries({ queryKey: ['rigs'] }),
  });
}

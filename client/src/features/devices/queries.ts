import { queryOptions, useMutation, useQueryClient } from '@tanstack/react-query';
import type { DeviceId } from '@shared/api/common';
import type { BodyInput } from '@shared/api/contract';
import { listDevices, registerDevice, revokeDevice } from '@shared/api/rigs';
import { call } from '../../lib/api';

export const devicesQuery = queryOptions({ queryKey: ['devices'], queryFn: async ({ signal }) => (await call(listDevices, { signal })).devices });

export function useRegisterDevice() {
  const queries = useQueryClient();
  return useMutation({
    mutationFn: (body: BodyInput<typeof registerDevice>) => call(registerDevice, { body }),
    onSuccess: () => queries.invalidateQueries({ queryKey: ['devices'] }),
    // The answer holds the key: it must not stay in memory after the slip was put away.
    gcTime: 0,
  });
}

export function useRevokeDevice() {
  const queries = useQueryClient();
  return useMutation({
    mutationFn: (deviceId: DeviceId) => call(revokeDevice, { params: { deviceId } }),
    onSuccess: () => queries.invalidateQueries({ queryKey: ['devices'] }),
  });
}

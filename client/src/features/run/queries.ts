import { useMutation, useQueryClient } from '@tanstack/react-query';
import type { DeviceId, TrialId } from '@shared/api/common';
import { armTrial, disarmTrial, stopTrial } from '@shared/api/sessions';
import { call } from '../../lib/api';

/** A change of the running trial makes its session and itself stale. */
function useStale() {
  const queries = useQueryClient();
  return () => Promise.all([['session'], ['trial'], ['devices'], ['today']].map((queryKey) => queries.invalidateQueries({ queryKey })));
}

export function useArm(trialId: TrialId) {
  const onSettled = useStale();
  return useMutation({ mutationFn: (deviceId: DeviceId) => call(armTrial, { params: { trialId }, body: { deviceId } }), onSettled });
}

export function useDisarm(trialId: TrialId) {
  const onSettled = useStale();
  return useMutation({ mutationFn: () => call(disarmTrial, { params: { trialId } }), onSettled });
}

export function useStop(trialId: TrialId) {
  const onSettled = useStale();
  return useMutation({ mutationFn: () => call(stopTrial, { params: { trialId } }), onSettled });
}

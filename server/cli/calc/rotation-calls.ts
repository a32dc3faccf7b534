import { eulerZyxFromQuat, geodesicAngle, matrixFromQuat, requirePose, rotvecFromQuat, slerp, type Quat } from '@shared/rig';
import { z } from 'zod';
import { defineCall } from './call';

/** Four numbers of norm 1; what rounding took from the norm is put back. */
export const unitQuaternion = z.tuple([z.number(), z.number(), z.number(), z.number()]);

/** @throws NumericError BAD_REQUEST when the norm is not 1 */
export function requireUnit(q: Quat): Quat {
  return requirePose({ p: [0, 0, 0], q, grasp: 0 }).q;
}

export const rotationCalls = {
  'rotation.convert': defineCall(z.object({ q: unitQuaternion }), (request) => {
    const q = requireUnit(request.q);
    return { matrix: matrixFromQuat(q), eulerZYX: eulerZyxFromQuat(q), rotvec: rotvecFromQuat(q) };
  }),

  'rotation.slerp': defineCall(
    z.object({ qa: unitQuaternion, qb: unitQuaternion, s: z.union([z.number(), z.array(z.number())]) }),
    (request) => {
      const qa = requireUnit(request.qa);
      const qb = requireUnit(request.qb);
      const shares = typeof request.s === 'number' ? [request.s] : request.s;
      return { q: shares.map((s) => slerp(qa, qb, s)) };
    },
  ),

  'rotation.angle': defineCall(z.object({ qa: unitQuaternion, qb: unitQuaternion }), (request) => ({
    angle: geodesicAngle(requireUnit(request.qa), requireUnit(request.qb)),
  })),
};

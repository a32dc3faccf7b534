import {
  orientationRepeatability,
  positionRepeatability,
  registerOrientations,
  registerPoints,
  timeOffset,
  trackingError,
  withinTolerances,
} from '@shared/rig';
import { z } from 'zod';
import { defineCall, numbers, vec3 } from './call';
import { requireUnit, unitQuaternion } from './rotation-calls';

const points = z.array(vec3);
const orientations = z.array(unitQuaternion);

export const calibrationCalls = {
  'register.points': defineCall(z.object({ from: points, to: points, scaled: z.boolean().default(false) }), ({ from, to, scaled }) =>
    registerPoints(from, to, scaled),
  ),

  'register.orientations': defineCall(z.object({ from: orientations, to: orientations }), ({ from, to }) =>
    registerOrientations(from.map(requireUnit), to.map(requireUnit)),
  ),

  'register.timeOffset': defineCall(z.object({ dt: z.number(), maxLag: z.number(), a: numbers, b: numbers }), ({ dt, maxLag, a, b }) =>
    timeOffset(a, b, dt, maxLag),
  ),

  'error.pose': defineCall(
    z.object({
      reference: points,
      measured: points,
      qReference: orientations.optional(),
      qMeasured: orientations.optional(),
      graspReference: numbers.optional(),
      graspMeasured: numbers.optional(),
    }),
    (request) => {
      const error = trackingError(
        { p: request.reference, q: request.qReference?.map(requireUnit), grasp: request.graspReference },
        { p: request.measured, q: request.qMeasured?.map(requireUnit), grasp: request.graspMeasured },
      );
      return { ...error, within: withinTolerances(error) };
    },
  ),

  'error.repeatability': defineCall(
    z.object({ command: vec3, attained: points, qCommand: unitQuaternion.optional(), qAttained: orientations.optional() }),
    (request) => ({
      ...positionRepeatability(request.command, request.attained),
      ...(request.qCommand === undefined || request.qAttained === undefined
        ? {}
        : { orientation: orientationRepeatability(requireUnit(request.qCommand), request.qAttained.map(requireUnit)) }),
    }),
  ),
};

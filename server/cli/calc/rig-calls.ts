import {
  cableLengths,
  checkRig,
  closureOf,
  distributeTensions,
  forwardKinematics,
  lengthRates,
  parseRig,
  requirePose,
  structureMatrix,
  wrenchFromTensions,
} from '@shared/rig';
import { z } from 'zod';
import { defineCall, numbers, vec3 } from './call';

const quaternion = z.tuple([z.number(), z.number(), z.number(), z.number()]);
const pose = z.object({ p: vec3, q: quaternion, grasp: z.number() });
// Read by the rig's own check, so that a faulty rig, of whatever shape, is BAD_RIG and not a fault of the request.
const rig = z.unknown().refine((value) => value !== undefined, 'is missing');

export const rigCalls = {
  'rig.check': defineCall(z.object({ rig }), (request) => ({ faults: checkRig(request.rig) })),

  'rig.structure': defineCall(z.object({ rig, pose }), (request) => {
    const model = parseRig(request.rig);
    const at = requirePose(request.pose);
    const A = structureMatrix(model, at, new Float64Array(7 * model.cableCount));
    const lengths = cableLengths(model, at, new Float64Array(model.cableCount));
    const inRows = Array.from({ length: 7 }, (_, row) => A.subarray(row * model.cableCount, (row + 1) * model.cableCount));
    return { lengths, A: inRows, ...closureOf(A, model.cableCount) };
  }),

  'rig.tensions': defineCall(
    z.object({ rig, pose, wrench: numbers, tensionMin: z.number().optional(), tensionMax: z.number().optional() }),
    (request) => {
      const { tensionMin, tensionMax } = request;
      const model = parseRig(request.rig);
      const limits = { tensionMin: tensionMin ?? model.tensionMin, tensionMax: tensionMax ?? model.tensionMax };
      return distributeTensions(model, requirePose(request.pose), request.wrench, limits);
    },
  ),

  'rig.wrench': defineCall(z.object({ rig, pose, tensions: numbers }), (request) => ({
    wrench: wrenchFromTensions(parseRig(request.rig), requirePose(request.pose), request.tensions, new Float64Array(7)),
  })),

  'rig.rates': defineCall(z.object({ rig, pose, twist: numbers }), (request) => {
    const model = parseRig(request.rig);
    return { lengthRates: lengthRates(model, requirePose(request.pose), request.twist, new Float64Array(model.cableCount)) };
  }),

  'rig.forward': defineCall(z.object({ rig, lengths: numbers, start: pose.optional() }), (request) =>
    forwardKinematics(parseRig(request.rig), request.lengths, request.start),
  ),
};

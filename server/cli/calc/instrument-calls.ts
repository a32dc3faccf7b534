import {
  pointingThroughput,
  rawWorkload,
  usabilityScale,
  weightedWorkload,
  WORKLOAD_SUBSCALES,
  type WorkloadPair,
  type WorkloadWeights,
  workloadWeights,
} from '@shared/instruments';
import { NumericError } from '@shared/rig';
import { z } from 'zod';
import { defineCall, numbers, rows } from './call';

const subscale = z.enum(WORKLOAD_SUBSCALES);
const rating = z.number().nullable().optional();
const subscales = z.strictObject({
  mental: rating,
  physical: rating,
  temporal: rating,
  performance: rating,
  effort: rating,
  frustration: rating,
});

export const instrumentCalls = {
  'instrument.workload': defineCall(
    z.object({
      subscales,
      pairs: z.array(z.tuple([subscale, subscale, subscale])).optional(),
      weights: z.record(subscale, z.number()).optional(),
    }),
    (request) => {
      const raw = rawWorkload(request.subscales);
      const weights = agreedWeights(request.pairs, request.weights);
      return weights === undefined ? { raw } : { raw, weights, weighted: weightedWorkload(request.subscales, weights) };
    },
  ),

  'instrument.usability': defineCall(z.object({ answers: z.array(z.number().nullable()) }), ({ answers }) => usabilityScale(answers)),

  'instrument.throughput': defineCall(
    z.object({
      D: z.number(),
      W: z.number(),
      from: numbers,
      target: numbers,
      starts: rows.optional(),
      selections: rows,
      movementTimes: numbers,
    }),
    // Without measured starts every movement is taken to begin where it should.
    (request) => pointingThroughput({ ...request, starts: request.starts ?? request.selections.map(() => request.from) }),
  ),
};

/** Weights from pairs, as given, or both when they say the same. */
function agreedWeights(pairs: readonly WorkloadPair[] | undefined, given: WorkloadWeights | undefined): WorkloadWeights | undefined {
  if (pairs === undefined) return given;
  const counted = workloadWeights(pairs);
  if (given !== undefined && WORKLOAD_SUBSCALES.some((name) => given[name] !== counted[name])) {
    throw new NumericError('BAD_REQUEST', 'The weights are not what the pairs add up to; send one of the two.');
  }
  return counted;
}

import { z } from 'zod';

/** One call of `calc`: what its request holds, and the function of `shared` that answers it. */
export interface Call {
  readonly request: z.ZodType;
  answer(request: unknown): unknown;
}

/**
 * Ties a schema to a function. Fields that the schema does not name are passed over, so that a request may carry notes.
 *
 * @param answer throws NumericError when there is no answer
 */
export function defineCall<Schema extends z.ZodType>(request: Schema, answer: (request: z.output<Schema>) => unknown): Call {
  return { request, answer: (given) => answer(given as z.output<Schema>) };
}

/** A list of finite numbers; how many a method needs is the method's own business. */
export const numbers = z.array(z.number());

/** One row after another. */
export const rows = z.array(numbers);

export const vec3 = z.tuple([z.number(), z.number(), z.number()]);

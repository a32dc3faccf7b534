import type { z } from 'zod';
import { ApiProblem } from './api-problem';

/**
 * The id that an address names.
 * @throws ApiProblem with status 404 when it is none: the page error shows "no such page"
 */
export function idFromPath<S extends z.ZodType>(schema: S, text: string | undefined): z.output<S> {
  const parsed = schema.safeParse(text);
  if (!parsed.success) throw new ApiProblem({ code: 'NOT_FOUND', status: 404, detail: 'There is no such page.' });
  return parsed.data;
}

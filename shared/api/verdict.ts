/** What a person judged of a flag. */
import { z } from 'zod';
import { personRef, wallTime } from './common';

export const verdictValue = z.enum(['confirmed', 'dismissed', 'unsure']);
export type VerdictValue = z.infer<typeof verdictValue>;

export const verdictId = z.uuid().brand<'VerdictId'>();
export type VerdictId = z.infer<typeof verdictId>;

export const verdict = z.object({
  id: verdictId,
  by: personRef,
  /** withdrawn: its author took the verdict before it back. */
  value: verdictValue.or(z.literal('withdrawn')),
  reason: z.string(),
  at: wallTime,
});
export type Verdict = z.infer<typeof verdict>;

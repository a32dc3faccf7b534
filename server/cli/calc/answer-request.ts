import { NumericError, type NumericErrorCode } from '@shared/rig';
import { z } from 'zod';
import type { Call } from './call';
import { calibrationCalls } from './calibration-calls';
import { instrumentCalls } from './instrument-calls';
import { motionCalls } from './motion-calls';
import { rigCalls } from './rig-calls';
import { rotationCalls } from './rotation-calls';
import { statsCalls } from './stats-calls';

/** Every call of section 5 of the contracts, by name. */
const calls: ReadonlyMap<string, Call> = new Map(
  Object.entries({ ...rigCalls, ...calibrationCalls, ...rotationCalls, ...motionCalls, ...statsCalls, ...instrumentCalls }),
);

export const callNames: readonly string[] = [...calls.keys()];

export type Answer =
  | { readonly ok: true; readonly value: unknown }
  | { readonly ok: false; readonly error: { readonly code: NumericErrorCode; readonly message: string } };

/** One request or a list of them; whatever else a request holds is read by its call. */
export const requestsSchema = z.union([z.looseObject({ call: z.string() }), z.array(z.looseObject({ call: z.string() }))]);
export type CalcRequest = z.infer<typeof requestsSchema.options[0]>;

/**
 * Answers one request. Refusals are answers; only a fault of the program itself is thrown.
 */
export function answerRequest(request: CalcRequest): Answer {
  const call = calls.get(request.call);
  if (call === undefined) return refusal('BAD_REQUEST', `There is no call named ${JSON.stringify(request.call)}.`);
  const read = call.request.safeParse(request);
  if (!read.success) return refusal('BAD_REQUEST', firstFault(read.error));
  try {
    return { ok: true, value: plain(call.answer(read.data), 'value') };
  } catch (error) {
    if (error instanceof NumericError) return refusal(error.code, error.message);
    throw error;
  }
}

function refusal(code: NumericErrorCode, message: string): Answer {
  return { ok: false, error: { code, message } };
}

function firstFault(error: z.ZodError): string {
  const issue = error.issues[0];
  const place = issue === undefined || issue.path.length === 0 ? 'The request' : issue.path.join('.');
  return `${place}: ${issue?.message ?? 'not what the call reads'}.`;
}

/**
 * The value as plain JSON: typed arrays as lists. JSON would write a number that is not finite as null, silently: that is refused.
 */
function plain(value: unknown, place: string): unknown {
  if (typeof value === 'number') {
    if (Number.isFinite(value)) return value;
    throw new NumericError('UNDEFINED', `${place} has no finite value for these numbers.`);
  }
  if (value === null || typeof value !== 'object') return value;
  if (Array.isArray(value) || ArrayBuffer.isView(value)) {
    return Array.from(value as ArrayLike<unknown>, (item, i) => plain(item, `${place}.${i}`));
  }
  return Object.fromEntries(
    Object.entries(value).flatMap(([key, item]) => (item === undefined ? [] : [[key, plain(item, key)]])),
  );
}

/**
 * Codes with which the numerics refuse a request. They are part of the contract of `calc`: never renamed, never reused.
 *
 * - BAD_REQUEST     the request does not have the shape asked for (wrong length, not a number, not a unit quaternion)
 * - BAD_RIG         the rig file is unsound
 * - SINGULAR        the pose or the data leave a direction undetermined
 * - NO_CONVERGENCE  an iteration ended without an answer
 * - TOO_SHORT       fewer values than the method needs
 * - UNDEFINED       enough values, but the quantity does not exist for them (division by zero, constant signal)
 */
export const numericErrorCodes = [
  'BAD_REQUEST',
  'BAD_RIG',
  'SINGULAR',
  'NO_CONVERGENCE',
  'TOO_SHORT',
  'UNDEFINED',
] as const;

export type NumericErrorCode = (typeof numericErrorCodes)[number];

/** A refusal of the numerics: a code for programs, a plain sentence with a way out for people. */
export class NumericError extends Error {
  override readonly name = 'NumericError';

  constructor(
    readonly code: NumericErrorCode,
    message: string,
  ) {
    super(message);
  }
}

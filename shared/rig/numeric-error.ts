/** Why a numeric request could not be answered. The codes are public: `calc` prints them. */
export type NumericErrorCode =
  /** The rig file does not describe a rig. */
  | 'BAD_RIG'
  /** An argument has the wrong shape, is not finite, or contradicts another. */
  | 'BAD_REQUEST'
  /** The answer exists but is not unique: a matrix lost rank. */
  | 'SINGULAR'
  /** An iteration did not settle. */
  | 'NO_CONVERGENCE'
  /** Fewer values than the method needs. */
  | 'TOO_SHORT'
  /** The quantity has no value for this input (a ratio over zero, a direction of nothing). */
  | 'UNDEFINED';

/** A numeric request that has no answer, with a public code, a plain sentence and a way out in the sentence. */
export class NumericError extends Error {
  override readonly name = 'NumericError';

  constructor(
    readonly code: NumericErrorCode,
    message: string,
  ) {
    super(message);
  }
}

import { NumericError } from '../rig/numeric-error';

/**
 * Refuses a list that a method cannot work on, before any number comes out of it.
 *
 * @param values  the sample; missing values must have been left out by the caller, knowingly
 * @param atLeast fewest values that the method needs
 * @param what    name of the list in the sentence of the error
 * @throws NumericError BAD_REQUEST when a value is not a finite number, TOO_SHORT when there are too few
 */
export function requireSample(values: ArrayLike<number>, atLeast: number, what: string): void {
  if (values.length < atLeast) {
    throw new NumericError(
      'TOO_SHORT',
      `${what} holds ${values.length} value${values.length === 1 ? '' : 's'}; at least ${atLeast} are needed.`,
    );
  }
  for (let i = 0; i < values.length; i++) {
    if (!Number.isFinite(values[i])) {
      throw new NumericError('BAD_REQUEST', `${what}[${i}] is not a finite number; leave missing values out first.`);
    }
  }
}

/**
 * Refuses two lists that should belong together value by value and do not.
 *
 * @throws NumericError as `requireSample`, and BAD_REQUEST when the lengths differ
 */
export function requirePairs(a: ArrayLike<number>, b: ArrayLike<number>, atLeast: number, names: [string, string]): void {
  requireSample(a, 0, names[0]);
  requireSample(b, 0, names[1]);
  if (a.length !== b.length) {
    throw new NumericError(
      'BAD_REQUEST',
      `${names[0]} holds ${a.length} values and ${names[1]} ${b.length}; pairs need the same number.`,
    );
  }
  requireSample(a, atLeast, names[0]);
}

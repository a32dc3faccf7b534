import { NumericError } from '../numeric-error';

/** @throws NumericError BAD_REQUEST unless there are exactly `count` finite numbers. `what` opens the sentence. */
export function requireNumbers(values: ArrayLike<number>, count: number, what: string): void {
  if (values.length === count && Array.from(values).every(Number.isFinite)) return;
  throw new NumericError('BAD_REQUEST', `${what} needs ${count} finite numbers; this one has ${values.length}, or one that is not finite.`);
}

/** Wrench or twist: seven finite numbers. @throws NumericError BAD_REQUEST otherwise */
export function requireSeven(values: ArrayLike<number>, what: 'A wrench' | 'A twist'): void {
  requireNumbers(values, 7, what);
}

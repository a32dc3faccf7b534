import { NumericError } from '../rig/numeric-error';
import { requireSample } from './require-sample';

/**
 * Holm's step-down correction: p values adjusted so that the chance of any false finding stays below the level.
 *
 * @param p p values of one family of tests, each 0 to 1
 * @returns adjusted values in the order given, at most 1
 * @throws NumericError TOO_SHORT for an empty family, BAD_REQUEST for a value outside 0 to 1
 * @source Holm 1979
 * @example holm([0.01, 0.04, 0.03]) // [0.03, 0.06, 0.06]
 */
export function holm(p: ArrayLike<number>): number[] {
  requireSample(p, 1, 'p');
  for (let i = 0; i < p.length; i++) {
    if ((p[i] as number) < 0 || (p[i] as number) > 1) {
      throw new NumericError('BAD_REQUEST', `p[${i}] is outside 0 to 1, so it is not a probability.`);
    }
  }
  const order = Array.from({ length: p.length }, (_, i) => i).sort((i, j) => (p[i] as number) - (p[j] as number));
  const adjusted = new Array<number>(p.length);
  let running = 0;
  order.forEach((index, place) => {
    running = Math.max(running, Math.min(1, (p.length - place) * (p[index] as number)));
    adjusted[index] = running;
  });
  return adjusted;
}

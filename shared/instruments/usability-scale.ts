import { NumericError } from '../rig/numeric-error';

export const USABILITY_ITEMS = 10;
/** What the scale asks to mark when someone cannot answer an item. */
const CENTRE = 3;

export interface UsabilityScore {
  /** 0 to 100; not a percentage. */
  readonly score: number;
  /** Items (from 1) without an answer, taken as the centre of the scale. */
  readonly missing: number[];
}

/**
 * System Usability Scale: ten statements answered from 1 (strongly disagree) to 5 (strongly agree).
 *
 * Odd statements count answer - 1, even ones 5 - answer, the sum times 2.5. The scale tells people to mark the centre where
 * they cannot answer, so a missing answer counts as 3 and is named in the result.
 *
 * @param answers ten in order; null where there is none
 * @throws NumericError BAD_REQUEST for another number of answers or one that is not a whole number 1 to 5, UNDEFINED when none was given
 * @source Brooke 1996
 * @example usabilityScale([5, 1, 5, 1, 5, 1, 5, 1, 5, 1]).score // 100
 */
export function usabilityScale(answers: readonly (number | null)[]): UsabilityScore {
  if (answers.length !== USABILITY_ITEMS) {
    throw new NumericError('BAD_REQUEST', `The scale has ten items; ${answers.length} answers were given.`);
  }
  const missing: number[] = [];
  let sum = 0;
  answers.forEach((answer, i) => {
    if (answer === null) missing.push(i + 1);
    else if (!Number.isInteger(answer) || answer < 1 || answer > 5) {
      throw new NumericError('BAD_REQUEST', `Answer ${i + 1} is ${answer}; answers are whole numbers from 1 to 5.`);
    }
    const value = answer ?? CENTRE;
    sum += i % 2 === 0 ? value - 1 : 5 - value;
  });
  if (missing.length === USABILITY_ITEMS) throw new NumericError('UNDEFINED', 'No item was answered, so there is no score.');
  return { score: 2.5 * sum, missing };
}

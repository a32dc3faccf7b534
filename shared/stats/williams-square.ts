import { NumericError } from '../rig/numeric-error';

const LARGEST = 100;

/**
 * Orders of n conditions in which each stands at each place equally often, and each follows each other equally often.
 *
 * An even number of conditions needs n rows, an odd one 2n (the square and its mirror image).
 *
 * @param n number of conditions, 2 to 100
 * @returns rows of conditions numbered from 0, one row a participant (or group of participants)
 * @throws NumericError BAD_REQUEST for anything but a whole number from 2 to 100
 * @source Williams 1949
 * @example williamsSquare(4) // [[0,1,3,2],[1,2,0,3],[2,3,1,0],[3,0,2,1]]
 */
export function williamsSquare(n: number): number[][] {
  if (!Number.isInteger(n) || n < 2 || n > LARGEST) {
    throw new NumericError('BAD_REQUEST', `A balanced square is made for a whole number of 2 to ${LARGEST} conditions.`);
  }
  // First row 0, 1, n-1, 2, n-2, ...: its neighbouring differences are all different.
  const first = Array.from({ length: n }, (_, place) => (place % 2 === 1 ? (place + 1) / 2 : (n - place / 2) % n));
  const rows = first.map((_, shift) => first.map((condition) => (condition + shift) % n));
  return n % 2 === 0 ? rows : [...rows, ...rows.map((row) => [...row].reverse())];
}

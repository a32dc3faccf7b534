import { readFileSync } from 'node:fs';

/** One of the files of independent values. */
export function reference<T>(name: string): T {
  return JSON.parse(readFileSync(new URL(`./reference/${name}.json`, import.meta.url), 'utf8')) as T;
}

/** Largest |a_i - b_i|; infinite when the lengths differ or a value is not a number, so that no comparison passes by accident. */
export function largestDifference(a: ArrayLike<number>, b: ArrayLike<number>): number {
  if (a.length !== b.length) return Infinity;
  let largest = 0;
  for (let i = 0; i < a.length; i++) {
    const apart = Math.abs(a[i]! - b[i]!);
    if (!(apart <= largest)) largest = Number.isNaN(apart) ? Infinity : apart;
  }
  return largest;
}

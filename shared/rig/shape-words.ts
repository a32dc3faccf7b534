import type { z } from 'zod';

/** `cables.7.exit` is exit of cable 8: in words cables count from 1. Other places keep their path; the whole is the file. */
export function placeWords(path: readonly PropertyKey[]): string {
  if (path.length === 0) return 'The file';
  const [list, index, ...rest] = path;
  if (list !== 'cables' || typeof index !== 'number') return path.map(String).join('.');
  return rest.length === 0 ? `Cable ${index + 1}` : `${rest.map(String).join('.')} of cable ${index + 1}`;
}

const KINDS: Readonly<Record<string, string>> = { number: 'a number', string: 'a text', array: 'a list', tuple: 'a list of numbers', object: 'an object with named fields' };

/** What is wrong with the shape at a place, as the second half of a sentence: "needs 3 numbers". */
export function shapeWords(issue: z.core.$ZodIssue): string {
  switch (issue.code) {
    case 'invalid_type':
      return `needs to be ${KINDS[issue.expected] ?? issue.expected}`;
    case 'too_small':
      return issue.origin === 'array' ? `needs at least ${counted(Number(issue.minimum))}` : 'is empty';
    case 'too_big':
      return issue.origin === 'array' ? `needs at most ${counted(Number(issue.maximum))}` : `is longer than ${String(issue.maximum)} characters`;
    case 'invalid_value':
      return `needs to be ${issue.values.map(String).join(' or ')}`;
    case 'invalid_union':
      return 'options' in issue && Array.isArray(issue.options) ? `needs to be ${issue.options.join(' or ')}` : 'has a shape that is not known';
    default:
      return 'is not as the format says';
  }
}

const counted = (entries: number) => (entries === 1 ? 'one entry' : `${entries} entries`);

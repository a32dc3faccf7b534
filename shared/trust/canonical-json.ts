/** A JSON value; `undefined` members are left out as JSON does. */
export type Json = string | number | boolean | null | readonly Json[] | { readonly [name: string]: Json | undefined };

/**
 * One text for one JSON value, so that a digest over it can be made again anywhere.
 *
 * Members in the order of their names' UTF-16 code units, no spaces, numbers and strings as ECMAScript writes them.
 *
 * @throws TypeError for numbers that JSON cannot hold and for lone surrogates
 * @source RFC 8785, JSON Canonicalization Scheme
 */
export function canonicalJson(value: Json): string {
  if (typeof value === 'number' && !Number.isFinite(value)) throw new TypeError('JSON has no infinity and no NaN');
  if (typeof value === 'string' && /\p{Surrogate}/u.test(value)) throw new TypeError('A string with a lone surrogate has no UTF-8');
  if (value === null || typeof value !== 'object') return JSON.stringify(value);
  if (isList(value)) return `[${value.map(canonicalJson).join(',')}]`;
  const members = Object.keys(value).sort().flatMap((name) => {
    const member = value[name];
    return member === undefined ? [] : [`${canonicalJson(name)}:${canonicalJson(member)}`];
  });
  return `{${members.join(',')}}`;
}

const isList = (value: object): value is readonly Json[] => Array.isArray(value);

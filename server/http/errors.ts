/** Codes with which the HTTP layer itself refuses, before any feature is asked. */
import { defineRefusals } from './refusal';

export const refuse = defineRefusals({
  SIGN_IN: { status: 401, sentence: 'Nobody is signed in here, or the sign-in has expired.', wayOut: 'Sign in and try again.' },
  FORBIDDEN: { status: 403, sentence: 'Your role does not allow this.', wayOut: 'Ask the lead of the study or an administrator.' },
  NOT_FOUND: { status: 404, sentence: 'There is no such thing here, or it is not open to you.', wayOut: 'Check the address, or ask the lead of the study to add you.' },
  ROUTE_UNKNOWN: { status: 404, sentence: 'This address is not part of the API.', wayOut: 'See /api/openapi.json for every route.' },
  INVALID: { status: 422, sentence: 'Something in the request is not as expected.', wayOut: 'Correct the points listed and send it again.' },
  MALFORMED_JSON: { status: 400, sentence: 'The body is not JSON.', wayOut: 'Send one JSON value, in UTF-8, without null characters in its texts.' },
  MEDIA_TYPE: { status: 415, sentence: 'The body has to be JSON.', wayOut: 'Send it with Content-Type: application/json.' },
  TOO_LARGE: { status: 413, sentence: 'The body is larger than this route takes.', wayOut: 'Send at most 1 MB.' },
  ORIGIN: { status: 403, sentence: 'The request came from a page of another site.', wayOut: 'Use the pages of this Tautbook. If it stands behind a proxy, set PUBLIC_URL to the address that people type.' },
  TOO_MANY: { status: 429, sentence: 'Too many attempts from this address.', wayOut: 'Wait a quarter of an hour and try again.' },
});

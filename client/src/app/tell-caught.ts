import { ApiProblem } from '../lib/api-problem';

/**
 * What an error boundary caught. A refusal of the server is already on the page in words; anything else is a fault of
 * this code and goes to the browser's own error report.
 */
export function tellCaught(error: unknown): void {
  if (!(error instanceof ApiProblem)) reportError(error);
}

/** What can go wrong between this page and the server, as one error type with a code, a sentence and a way out. */
import { problem, type FaultPoint } from '@shared/api/common';

interface Told {
  code: string;
  detail: string;
  status?: number;
  wayOut?: string;
  faults?: readonly FaultPoint[];
  requestId?: string;
}

/**
 * Codes made on this side: NETWORK (no answer came), ANSWER_UNREADABLE (an answer that is not what the contract says).
 * All others are the server's. `status` is 0 when there was no answer.
 */
export class ApiProblem extends Error {
  override readonly name = 'ApiProblem';
  readonly code: string;
  readonly detail: string;
  readonly status: number;
  readonly wayOut: string | undefined;
  readonly faults: readonly FaultPoint[];
  readonly requestId: string | undefined;

  constructor(told: Told) {
    super(told.detail);
    this.code = told.code;
    this.detail = told.detail;
    this.status = told.status ?? 0;
    this.wayOut = told.wayOut;
    this.faults = told.faults ?? [];
    this.requestId = told.requestId;
  }

  /** The sign-in is over or never was: nothing is lost by signing in again. */
  get signedOut(): boolean {
    return this.status === 401;
  }
}

export const networkProblem = (): ApiProblem => new ApiProblem({
  code: 'NETWORK',
  detail: 'The server did not answer.',
  wayOut: 'Nothing was changed and what you typed is still here. Check the connection, then try again.',
});

export const unreadableProblem = (status: number): ApiProblem => new ApiProblem({
  code: 'ANSWER_UNREADABLE',
  status,
  detail: 'The server’s answer could not be read.',
  wayOut: 'This page may be older than the server: load it again.',
});

/** Reads a refused answer; one that is no problem+json (a proxy's page, for example) still becomes a sentence. */
export async function readProblem(response: Response): Promise<ApiProblem> {
  const body: unknown = await response.json().catch(() => null);
  const parsed = problem.safeParse(body);
  if (parsed.success) return new ApiProblem(parsed.data);
  return new ApiProblem({
    code: `HTTP_${response.status}`,
    status: response.status,
    detail: response.status >= 500 ? 'The server met a fault of its own.' : `The server refused the request (${response.status}).`,
    wayOut: 'Try again; if it stays, tell the administrator the time and what you did.',
  });
}

/** Anything thrown, as a problem that can be shown. */
export function asProblem(error: unknown): ApiProblem {
  if (error instanceof ApiProblem) return error;
  return new ApiProblem({
    code: 'PAGE_FAULT',
    detail: 'This part of the page met a fault of its own.',
    wayOut: 'Load the page again; if it stays, tell the administrator the time and what you did.',
  });
}

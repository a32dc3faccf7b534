/** Every error of a request ends here and leaves as `application/problem+json` (RFC 9457). */
import { STATUS_CODES } from 'node:http';
import type { ErrorRequestHandler, Request, RequestHandler, Response } from 'express';
import type { Logger } from 'pino';
import type { Problem } from '@shared/api/common';
import { refuse } from './errors';
import { Refusal } from './refusal';

export function problemOf(refusal: Refusal, requestId?: string): Problem {
  return {
    type: `urn:tautbook:problem:${refusal.code}`,
    title: STATUS_CODES[refusal.status] ?? 'Error',
    status: refusal.status,
    detail: refusal.message,
    code: refusal.code,
    wayOut: refusal.wayOut,
    ...(requestId === undefined ? {} : { requestId }),
    ...(refusal.faults === undefined ? {} : { faults: [...refusal.faults] }),
  };
}

const internal = () => new Refusal('INTERNAL', 500, 'Something went wrong on our side; nothing of yours was changed halfway.', 'Try again. If it stays, give the administrator the request number.');

export function sendProblem(res: Response, refusal: Refusal): void {
  res.status(refusal.status).type('application/problem+json').send(JSON.stringify(problemOf(refusal, requestIdOf(res))));
}

export const requestIdOf = (res: Response): string => res.locals['requestId'] as string;

/** Errors that Express and its body parser make carry a status and a type. */
function refusalOf(error: unknown): Refusal | null {
  if (error instanceof Refusal) return error;
  const type = (error as { type?: unknown } | null)?.type;
  if (type === 'entity.parse.failed' || type === 'encoding.unsupported' || type === 'charset.unsupported') return refuse('MALFORMED_JSON');
  if (type === 'entity.too.large') return refuse('TOO_LARGE');
  if (type === 'request.aborted') return refuse('MALFORMED_JSON');
  if (error instanceof URIError) return refuse('NOT_FOUND');
  return null;
}

/** Database errors print their parameters, bytes and all: only message, code and place are kept. */
export function describeFault(error: unknown): Record<string, unknown> {
  if (!(error instanceof Error)) return { message: String(error).slice(0, 500) };
  const cause = error.cause instanceof Error ? error.cause : error;
  return {
    name: error.name,
    code: (cause as { code?: unknown }).code,
    message: cause.message.slice(0, 500),
    stack: error.stack?.split('\n').filter((line) => line.trimStart().startsWith('at ')).slice(0, 12).map((line) => line.trim()),
  };
}

export function problemHandler(log: Logger): ErrorRequestHandler {
  return (error: unknown, req: Request, res: Response, _next) => {
    const expected = refusalOf(error);
    if (expected === null) {
      log.error({ requestId: requestIdOf(res), method: req.method, path: req.path, fault: describeFault(error) }, 'unexpected error in a request');
    }
    if (res.headersSent) {
      res.destroy(); // a stream that breaks halfway must not look complete
      return;
    }
    sendProblem(res, expected ?? internal());
  };
}

export const unknownRoute: RequestHandler = () => {
  throw refuse('ROUTE_UNKNOWN');
};

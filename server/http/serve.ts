/**
 * One HTTP route, the same way for all: who asks, may they, is the input as promised, do it, write it down, answer.
 *
 * Order matters: an id that cannot exist reads as absent before anything is looked up, and what a body holds is told
 * only to those who may use the route.
 */
import type { Request, Response, Router } from 'express';
import type { z } from 'zod';
import type { BodyOf, ParamsOf, QueryOf, ResponseOf, RouteContract } from '@shared/api/contract';
import type { FaultPoint } from '@shared/api/common';
import type { RouteId } from '@shared/api';
import type { Access, Membership, SignedIn } from '../auth';
import { refuse } from './errors';

/** What a change is about, for the audit trail; never a secret. */
export interface AuditNote {
  /** Who it turned out to be, where nobody was signed in yet. */
  by?: { id: string; name: string };
  subject?: string;
  detail?: Record<string, unknown>;
}

export interface AuditLine {
  actor: string;
  who: string;
  action: string;
  subject: string;
  detail: Record<string, unknown>;
}

/** Where routes are served: the router, and who is asked on the way. */
export interface ApiRouter {
  readonly express: Router;
  whoIs(req: Request, res: Response): Promise<SignedIn | null>;
  /** @throws Refusal SIGN_IN, FORBIDDEN or NOT_FOUND */
  guard(id: RouteId, person: SignedIn | null, params: Record<string, string>): Promise<Access>;
  audit(line: AuditLine): Promise<void>;
  /** Parses what is answered with the contract: in tests, where a wrong answer is a fault of ours. */
  readonly checkResponses: boolean;
}

export interface Call<C extends RouteContract> {
  readonly params: ParamsOf<C>;
  readonly query: QueryOf<C>;
  readonly body: BodyOf<C>;
  /** Who asks. Reading it on a route for anyone is a fault of ours. */
  readonly person: SignedIn;
  /** Their place in the study that the route is about. */
  readonly membership: Membership;
  readonly request: Request;
  /** For routes that write bytes themselves. */
  readonly response: Response;
  /** Adds to the audit entry that is written when the handler succeeds. */
  note(about: AuditNote): void;
}

export type Handler<C extends RouteContract> = (call: Call<C>) => Promise<ResponseOf<C>>;

const faultsOf = (error: z.ZodError, root: string): FaultPoint[] =>
  error.issues.map((issue) => ({ code: issue.code.toUpperCase(), path: [root, ...issue.path.map(String)].filter((part) => part !== '').join('.'), message: issue.message }));

function parseOrRefuse(schema: z.ZodType | undefined, value: unknown, root: string): unknown {
  if (schema === undefined) return undefined;
  const parsed = schema.safeParse(value ?? {});
  if (!parsed.success) throw refuse('INVALID', {}, faultsOf(parsed.error, root));
  return parsed.data;
}

function parseParams(schema: z.ZodType | undefined, value: unknown): Record<string, string> {
  if (schema === undefined) return {};
  const parsed = schema.safeParse(value);
  if (!parsed.success) throw refuse('NOT_FOUND');
  return parsed.data as Record<string, string>;
}

function requireJson(req: Request): void {
  if (Number(req.headers['content-length'] ?? 0) > 0 && !req.is('json')) throw refuse('MEDIA_TYPE');
}

function present<T>(value: T | null, what: string, id: string): T {
  if (value === null) throw new Error(`The guard of ${id} lets in callers without ${what}`);
  return value;
}

export function serve<C extends RouteContract>(router: ApiRouter, contract: C, handler: Handler<C>): void {
  const method = contract.method.toLowerCase() as Lowercase<C['method']>;
  router.express[method](contract.path, async (req: Request, res: Response) => {
    const person = await router.whoIs(req, res);
    // A caller who is not signed in learns nothing about which ids exist, so the guard is asked first for them.
    if (person === null) await router.guard(contract.id as RouteId, null, {});
    const params = parseParams(contract.params, req.params);
    const access = await router.guard(contract.id as RouteId, person, params);
    const query = parseOrRefuse(contract.query, req.query, '');
    if (contract.body !== undefined) requireJson(req);
    const body = parseOrRefuse(contract.body, req.body as unknown, '');

    const about: AuditNote = {};
    const answer = await handler({
      params: params as ParamsOf<C>,
      query: query as QueryOf<C>,
      body: body as BodyOf<C>,
      get person() { return present(access.person, 'a person', contract.id); },
      get membership() { return present(access.membership, 'a membership', contract.id); },
      request: req,
      response: res,
      note: (more) => { Object.assign(about, more); },
    });

    const by = about.by ?? access.person;
    if (by !== null && isAudited(contract, access)) await router.audit(auditLine(contract, by, access, params, about, answer));
    if (contract.binary !== undefined) return;
    res.set('Cache-Control', 'no-store');
    res.json(router.checkResponses && contract.response ? checked(contract, answer) : answer);
  });
}

/** Every change by anyone known, and every read of a study's data by a clinician. */
const isAudited = (contract: RouteContract, access: Access) => contract.method !== 'GET' || access.membership?.role === 'clinician';

function auditLine(contract: RouteContract, by: { id: string; name: string }, access: Access, params: Record<string, string>, about: AuditNote, answer: unknown): AuditLine {
  const idOfAnswer = (answer as { id?: unknown } | undefined)?.id;
  return {
    actor: by.id,
    who: by.name,
    action: contract.id,
    subject: about.subject ?? Object.values(params).at(-1) ?? (typeof idOfAnswer === 'string' || typeof idOfAnswer === 'number' ? String(idOfAnswer) : ''),
    detail: { ...params, ...(access.membership ? { studyId: access.membership.studyId } : {}), ...about.detail },
  };
}

function checked(contract: RouteContract, answer: unknown): unknown {
  const parsed = contract.response?.safeParse(answer);
  if (parsed?.success) return answer;
  throw new Error(`The answer of ${contract.id} breaks its contract: ${JSON.stringify(parsed?.error.issues)}`);
}

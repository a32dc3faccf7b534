/** Calls the server by contract: the types of what is sent and what comes back are those of shared/api. */
import type { BodyInput, ParamsInput, QueryInput, ResponseOf, RouteContract } from '@shared/api/contract';
import { networkProblem, readProblem, unreadableProblem } from './api-problem';

type Part<Name extends string, Input> = [Input] extends [undefined] ? unknown : Record<Name, Input>;
type OptionalPart<Name extends string, Input> = [Input] extends [undefined] ? unknown : Partial<Record<Name, Input>>;

/** What a contract wants to be called with; `signal` takes the call back. */
export type CallInput<C extends RouteContract> =
  & Part<'params', ParamsInput<C>> & OptionalPart<'query', QueryInput<C>> & Part<'body', BodyInput<C>> & { signal?: AbortSignal };

type Args<C extends RouteContract> = [ParamsInput<C>, BodyInput<C>] extends [undefined, undefined] ? [input?: CallInput<C>] : [input: CallInput<C>];

interface LooseInput {
  params?: Record<string, unknown>;
  query?: Record<string, unknown>;
  body?: unknown;
  signal?: AbortSignal;
}

/** Address of a route with its parameters and query filled in; also for links that download. */
export function addressOf(contract: RouteContract, input: Pick<LooseInput, 'params' | 'query'> = {}): string {
  const path = contract.path.replace(/:(\w+)/g, (_, name: string) => {
    const value = input.params?.[name];
    if (value === undefined) throw new Error(`${contract.id} needs ${name}`);
    return encodeURIComponent(String(value));
  });
  const query = new URLSearchParams();
  for (const [name, value] of Object.entries(input.query ?? {})) if (value !== undefined && value !== null) query.set(name, String(value));
  const tail = query.toString();
  return tail === '' ? path : `${path}?${tail}`;
}

async function send(contract: RouteContract, input: LooseInput): Promise<Response> {
  const init: RequestInit = { method: contract.method, credentials: 'same-origin', headers: { accept: contract.binary ?? 'application/json' } };
  if (input.signal) init.signal = input.signal;
  if (input.body !== undefined) {
    init.body = JSON.stringify(input.body);
    init.headers = { ...init.headers, 'content-type': 'application/json' };
  }
  let response: Response;
  try {
    response = await fetch(addressOf(contract, input), init);
  } catch (error) {
    if (input.signal?.aborted) throw error;
    throw networkProblem();
  }
  if (!response.ok) throw await readProblem(response);
  return response;
}

/**
 * Calls a JSON route.
 * @throws ApiProblem; the signal's own abort error when the call was taken back
 */
export async function call<C extends RouteContract>(contract: C, ...[input]: Args<C>): Promise<ResponseOf<C>> {
  const response = await send(contract, (input ?? {}) as LooseInput);
  const body: unknown = await response.json().catch(() => { throw unreadableProblem(response.status); });
  const parsed = contract.response?.safeParse(body);
  if (parsed && !parsed.success) throw unreadableProblem(response.status);
  return parsed?.data as ResponseOf<C>;
}

/** Calls a route that answers bytes. Throws as `call` does. */
export async function callBytes<C extends RouteContract>(contract: C, ...[input]: Args<C>): Promise<Uint8Array> {
  const response = await send(contract, (input ?? {}) as LooseInput);
  try {
    return new Uint8Array(await response.arrayBuffer());
  } catch (error) {
    if (input?.signal?.aborted) throw error;
    throw networkProblem();
  }
}

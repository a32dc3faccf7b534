/**
 * What one HTTP route promises: the types of both sides come from here, and so does the API description.
 *
 * `path` is in the form that the router takes (`/api/trials/:trialId/notes`). A route without `body` takes none;
 * `binary` marks a response that is bytes (its media type) instead of JSON.
 */
import type { z } from 'zod';

export type Method = 'GET' | 'POST' | 'PUT' | 'PATCH' | 'DELETE';

type Schema = z.ZodType;

export interface RouteContract<
  Id extends string = string,
  P extends Schema | undefined = Schema | undefined,
  Q extends Schema | undefined = Schema | undefined,
  B extends Schema | undefined = Schema | undefined,
  R extends Schema | undefined = Schema | undefined,
> {
  readonly id: Id;
  readonly method: Method;
  readonly path: `/api/${string}`;
  readonly summary: string;
  readonly params?: P;
  readonly query?: Q;
  readonly body?: B;
  readonly response?: R;
  readonly binary?: string;
  /** Media types of a body that is a stream of bytes instead of JSON. */
  readonly takes?: readonly string[];
}

/** Keeps the literal types of a contract; what was left out reads as undefined. */
export function route<
  const Id extends string,
  P extends Schema | undefined = undefined,
  Q extends Schema | undefined = undefined,
  B extends Schema | undefined = undefined,
  R extends Schema | undefined = undefined,
>(contract: RouteContract<Id, P, Q, B, R>): RouteContract<Id, P, Q, B, R> & { readonly params: P; readonly query: Q; readonly body: B; readonly response: R } {
  return contract as ReturnType<typeof route<Id, P, Q, B, R>>;
}

// The fields of a contract are optional, so their types carry an undefined that says nothing: it is taken off first.
type Out<S> = [Exclude<S, undefined>] extends [never] ? undefined : Exclude<S, undefined> extends infer T extends z.ZodType ? z.output<T> : undefined;
type In<S> = [Exclude<S, undefined>] extends [never] ? undefined : Exclude<S, undefined> extends infer T extends z.ZodType ? z.input<T> : undefined;

/** Parsed values, as the server's handler sees them. */
export type ParamsOf<C extends RouteContract> = Out<C['params']>;
export type QueryOf<C extends RouteContract> = Out<C['query']>;
export type BodyOf<C extends RouteContract> = Out<C['body']>;
/** What the handler answers and the client reads. */
export type ResponseOf<C extends RouteContract> = Out<C['response']>;
/** What a caller may send. */
export type ParamsInput<C extends RouteContract> = In<C['params']>;
export type QueryInput<C extends RouteContract> = In<C['query']>;
export type BodyInput<C extends RouteContract> = In<C['body']>;

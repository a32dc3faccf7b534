/** Every route of Tautbook, in one table: the router, the client, the guards and the API description all read it. */
import type { RouteContract } from './contract';
import * as description from './description';
import * as notes from './notes';
import * as people from './people';
import * as recordings from './recordings';
import * as review from './review';
import * as rigs from './rigs';
import * as sessions from './sessions';
import * as signIn from './sign-in';
import * as studies from './studies';

const isRoute = (value: unknown): value is RouteContract =>
  typeof value === 'object' && value !== null && 'method' in value && 'path' in value && 'id' in value;

type RoutesOf<M> = { [K in keyof M as M[K] extends RouteContract ? K : never]: M[K] };
type AllModules = typeof description & typeof signIn & typeof people & typeof rigs & typeof studies & typeof sessions & typeof recordings & typeof notes & typeof review;
export type RouteId = RoutesOf<AllModules>[keyof RoutesOf<AllModules>] extends infer R ? (R extends RouteContract<infer Id> ? Id : never) : never;

export const allRoutes: readonly RouteContract[] = [description, signIn, people, rigs, studies, sessions, recordings, notes, review]
  .flatMap((module) => Object.values(module as Record<string, unknown>))
  .filter(isRoute);

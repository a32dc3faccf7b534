import { MutationCache, QueryCache, QueryClient } from '@tanstack/react-query';
import { ApiProblem } from '../lib/api-problem';
import { meQuery } from '../lib/me';
import { signInLapse } from '../lib/sign-in-lapse';

/** An answer of the server is final; only silence and its own faults are worth asking again. */
const worthAsking = (error: unknown) => !(error instanceof ApiProblem) || error.status === 0 || error.status >= 500;

/** The client's memory of what the server said. A 401 in the middle of work is told to the shell, which offers the sign-in. */
export function createQueries(): QueryClient {
  const queries: QueryClient = new QueryClient({
    queryCache: new QueryCache({ onError: lapse }),
    mutationCache: new MutationCache({ onError: lapse }),
    defaultOptions: {
      queries: { retry: (failures, error) => failures < 2 && worthAsking(error), staleTime: 15_000, refetchOnWindowFocus: true },
      mutations: { retry: false },
    },
  });
  function lapse(error: unknown): void {
    if (error instanceof ApiProblem && error.signedOut && queries.getQueryData(meQuery.queryKey) !== undefined) signInLapse.set(true);
  }
  return queries;
}

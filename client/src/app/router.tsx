import type { QueryClient } from '@tanstack/react-query';
import { createBrowserRouter, redirect, type LoaderFunctionArgs } from 'react-router-dom';
import { accountRoutes } from '../features/account';
import { deviceRoutes } from '../features/devices';
import { entranceRoutes } from '../features/entrance';
import { outboxRoutes } from '../features/outbox';
import { peopleRoutes } from '../features/people';
import { rigRoutes } from '../features/rigs';
import { runRoutes } from '../features/run';
import { sessionRoutes } from '../features/sessions';
import { studyRoutes } from '../features/studies';
import { todayRoutes } from '../features/today';
import { triageRoutes } from '../features/triage';
import { trialRoutes } from '../features/trial';
import { asProblem } from '../lib/api-problem';
import { entranceQuery, meQuery } from '../lib/me';
import { signInLapse } from '../lib/sign-in-lapse';
import { NotFoundPage } from './NotFoundPage';
import { Opening } from './Opening';
import { PageError } from './PageError';
import { Shell } from './Shell';

/** Every page by its address. A page's code is fetched when it is first turned to. */
export function createPages(queries: QueryClient) {
  /** Lets a signed-in person in; sends all others to the entrance, and back afterwards. */
  async function signedIn({ request }: LoaderFunctionArgs) {
    try {
      await queries.ensureQueryData(meQuery);
      return null;
    } catch (error) {
      if (!asProblem(error).signedOut) throw error;
    }
    signInLapse.set(false);
    const { setupNeeded } = await queries.fetchQuery(entranceQuery);
    if (setupNeeded) return redirect('/setup');
    const { pathname, search } = new URL(request.url);
    return redirect(pathname === '/' ? '/sign-in' : `/sign-in?to=${encodeURIComponent(pathname + search)}`);
  }

  return createBrowserRouter([
    { HydrateFallback: Opening, ErrorBoundary: PageError, children: entranceRoutes },
    {
      path: '/',
      loader: signedIn,
      Component: Shell,
      HydrateFallback: Opening,
      ErrorBoundary: PageError,
      children: [
        {
          ErrorBoundary: PageError,
          children: [
            ...todayRoutes,
            ...studyRoutes,
            ...sessionRoutes,
            ...runRoutes,
            ...triageRoutes,
            ...trialRoutes,
            ...rigRoutes,
            ...deviceRoutes,
            ...peopleRoutes,
            ...outboxRoutes,
            ...accountRoutes,
            { path: '*', Component: NotFoundPage },
          ],
        },
      ],
    },
  ]);
}

import type { RouteObject } from 'react-router-dom';
import { page } from '../../lib/page';

export { SignInForm } from './SignInForm';

/** Pages of someone who is not signed in. */
export const entranceRoutes: RouteObject[] = [
  {
    lazy: async () => ({ Component: (await import('./EntranceFrame')).EntranceFrame }),
    children: [
      page('/sign-in', async () => (await import('./SignInPage')).SignInPage),
      page('/forgot', async () => (await import('./ForgotPage')).ForgotPage),
      page('/reset', async () => (await import('./ResetPage')).ResetPage),
      page('/setup', async () => (await import('./SetUpPage')).SetUpPage),
    ],
  },
];

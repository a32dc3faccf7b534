import type { RouteObject } from 'react-router-dom';
import { page } from '../../lib/page';

export const accountRoutes: RouteObject[] = [page('account', async () => (await import('./AccountPage')).AccountPage)];

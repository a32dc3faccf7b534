import type { RouteObject } from 'react-router-dom';
import { page } from '../../lib/page';

export const todayRoutes: RouteObject[] = [page('', async () => (await import('./TodayPage')).TodayPage)];

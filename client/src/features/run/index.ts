import type { RouteObject } from 'react-router-dom';
import { page } from '../../lib/page';

export const runRoutes: RouteObject[] = [page('sessions/:sessionId/run', async () => (await import('./RunPage')).RunPage)];

import type { RouteObject } from 'react-router-dom';
import { page } from '../../lib/page';

export const triageRoutes: RouteObject[] = [page('studies/:studyId/moments', async () => (await import('./TriagePage')).TriagePage)];

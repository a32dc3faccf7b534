import type { RouteObject } from 'react-router-dom';
import { page } from '../../lib/page';

export { AuditTable } from './AuditTable';
export { latestAuditQuery, peopleQuery } from './queries';

export const peopleRoutes: RouteObject[] = [
  page('people', async () => (await import('./PeoplePage')).PeoplePage),
  page('audit', async () => (await import('./AuditPage')).AuditPage),
];

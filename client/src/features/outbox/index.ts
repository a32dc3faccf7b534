import type { RouteObject } from 'react-router-dom';
import { page } from '../../lib/page';

export const outboxRoutes: RouteObject[] = [page('outbox', async () => (await import('./OutboxPage')).OutboxPage)];

import type { RouteObject } from 'react-router-dom';
import { page } from '../../lib/page';

export { devicesQuery } from './queries';

export const deviceRoutes: RouteObject[] = [page('devices', async () => (await import('./DevicesPage')).DevicesPage)];

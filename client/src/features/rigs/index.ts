import type { RouteObject } from 'react-router-dom';
import { page } from '../../lib/page';

export { rigRevisionQuery, rigsQuery } from './queries';

export const rigRoutes: RouteObject[] = [
  page('rigs', async () => (await import('./RigsPage')).RigsPage),
  page('rigs/import', async () => (await import('./ImportRigPage')).ImportRigPage),
  page('rigs/:rigId', async () => (await import('./RigPage')).RigPage),
];

import type { RouteObject } from 'react-router-dom';
import { page } from '../../lib/page';

export { flagDetail, flagHead, flagTone } from './flag-words';
export { trialQuery } from './queries';

export const trialRoutes: RouteObject[] = [page('trials/:trialId', async () => (await import('./TrialPage')).TrialPage)];

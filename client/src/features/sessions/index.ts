import type { RouteObject } from 'react-router-dom';
import { page } from '../../lib/page';

export { sessionQuery, studySessionsQuery } from './queries';
export { OutcomeDialog } from './OutcomeDialog';
export { OutcomeForm } from './OutcomeForm';
export { SessionTable } from './SessionTable';
export { conditionName, TrialName, TrialStateWord } from './TrialWords';

export const sessionRoutes: RouteObject[] = [
  page('studies/:studyId/sessions/new', async () => (await import('./PlanSessionPage')).PlanSessionPage),
  page('sessions/:sessionId', async () => (await import('./SessionPage')).SessionPage),
  page('sessions/:sessionId/log', async () => (await import('./SessionLogPage')).SessionLogPage),
];

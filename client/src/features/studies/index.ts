import type { RouteObject } from 'react-router-dom';
import { page } from '../../lib/page';

export { STUDY_STATES } from './study-words';
export { allStudiesQuery, participantsQuery, studiesQuery, studyQuery } from './queries';

export const studyRoutes: RouteObject[] = [
  page('studies', async () => (await import('./StudiesPage')).StudiesPage),
  page('studies/new', async () => (await import('./NewStudyPage')).NewStudyPage),
  page('studies/:studyId', async () => (await import('./StudyPage')).StudyPage),
];

export { studyRoutes } from './routes';
export { createStudyService, type StudyService } from './service';

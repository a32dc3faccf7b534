export { labRoutes } from './routes';
export { createLabService, type LabService } from './service';

export { rigRoutes } from './routes';
export { createRigService, type RigService } from './service';

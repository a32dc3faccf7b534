export { flagRoutes } from './routes';
export { createFlagService, type FlagService } from './service';

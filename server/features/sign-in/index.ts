export { signInRoutes } from './routes';

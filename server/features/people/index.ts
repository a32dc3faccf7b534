export { peopleRoutes } from './routes';
export { createPeopleService, type DemoSignIn, type PeopleService } from './service';

export { sessionRoutes } from './routes';
export { createSessionReader, type SessionReader } from './read-service';
export { createSessionService, type Actor, type SessionService } from './service';
export { createTrialBook } from './trial-book';
export { chainHolds, hashOfEntry, type ChainEntry } from './log-chain';

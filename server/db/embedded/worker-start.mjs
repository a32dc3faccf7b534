// A worker thread on Node 20 does not inherit the TypeScript loader of the main thread: register it, then start.
import { register } from 'tsx/esm/api';

register();
await import('./worker.ts');

/** Every route of the API on one Express app, in the order in which a request meets them. */
import { readFileSync } from 'node:fs';
import express, { type Express, Router } from 'express';
import type { Logger } from 'pino';
import { describeApi as describe } from '@shared/api/description';
import { changesAccess, type Gate, isOpen, writeAudit } from './auth';
import type { Database } from './db/engine';
import { deviceRoutes } from './features/devices';
import { flagRoutes } from './features/flags';
import { labRoutes } from './features/lab';
import { noteRoutes } from './features/notes';
import { peopleRoutes } from './features/people';
import { recordingRoutes } from './features/recordings';
import { reviewRoutes } from './features/review';
import { rigRoutes } from './features/rigs';
import { sessionRoutes } from './features/sessions';
import { signInRoutes } from './features/sign-in';
import { studyRoutes } from './features/studies';
import { type ApiRouter, describeApi, jsonBody, problemHandler, raiseShield, type RateOptions, rates, sameOriginChanges, serve, serveClient, unknownRoute } from './http';
import type { Services } from './services';

export interface ApiOptions {
  db: Database;
  services: Services;
  gate: Gate;
  log: Logger;
  publicUrl: string | undefined;
  trustedProxies: number;
  clientDirectory: string;
  rateLimits: RateLimits;
  checkResponses: boolean;
  /** Somebody's role, membership or sign-in was changed. */
  onAccessChanged: () => void;
}

export interface RateLimits {
  signIn: RateOptions;
  mail: RateOptions;
}

const quarterHourMs = 15 * 60 * 1000;

/** A person mistypes a few times; a program that guesses tries thousands. */
export const defaultRateLimits: RateLimits = {
  signIn: { windowMs: quarterHourMs, limit: 20, failuresOnly: true },
  mail: { windowMs: quarterHourMs, limit: 10, failuresOnly: false },
};

const version = (JSON.parse(readFileSync(new URL('../package.json', import.meta.url), 'utf8')) as { version: string }).version;

export function createApi(options: ApiOptions): Express {
  const { gate, log, rateLimits } = options;
  const app = express();
  raiseShield(app, options);

  const guessing = rates(rateLimits.signIn);
  app.use(['/api/auth/sign-in', '/api/auth/reset-password', '/api/auth/change-password', '/api/setup'], guessing);
  app.use('/api/auth/request-password-reset', rates(rateLimits.mail));
  app.use('/api', sameOriginChanges(options.publicUrl));
  app.use('/api', jsonBody());
  app.use(routes(options, gate));
  app.use('/api', unknownRoute);
  serveClient(app, options.clientDirectory);
  app.use(problemHandler(log));
  return app;
}

function routes({ db, services, checkResponses, onAccessChanged }: ApiOptions, gate: Gate): Router {
  const router: ApiRouter = {
    express: Router(),
    checkResponses,
    async whoIs(req, res) {
      const found = await services.desk.whoIs(req.headers);
      if (found && found.setCookies.length > 0) res.append('Set-Cookie', found.setCookies);
      return found?.person ?? null;
    },
    guard: (id, person, params) => gate.pass(id, person, params),
    async audit(line) {
      await writeAudit(db, line);
      if (changesAccess.has(line.action)) onAccessChanged();
    },
  };
  const description = describeApi(version, isOpen);
  serve(router, describe, async () => description);
  signInRoutes(router, services.desk);
  peopleRoutes(router, services.people);
  labRoutes(router, services.lab);
  rigRoutes(router, services.rigs);
  deviceRoutes(router, services.devices);
  studyRoutes(router, services.studies);
  sessionRoutes(router, services.sessions, services.sessionReader, gate);
  reviewRoutes(router, services.review);
  recordingRoutes(router, services.recordings, services.imports);
  flagRoutes(router, services.flags);
  noteRoutes(router, services.notes);
  return router.express;
}

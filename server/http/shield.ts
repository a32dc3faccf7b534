/** What stands before every route: headers, request numbers, origin of changes, body size, rates. */
import { randomUUID } from 'node:crypto';
import express, { type Express, type RequestHandler } from 'express';
import { rateLimit } from 'express-rate-limit';
import helmet from 'helmet';
import { refuse } from './errors';
import { sendProblem } from './problem';

/** 1 MB: a rig file has some kilobytes, a long protocol some tens. */
const bodyLimitBytes = 1_000_000;

export interface ShieldOptions {
  /** Address that people type; undefined: whatever the request was sent to. */
  publicUrl: string | undefined;
  trustedProxies: number;
}

export function raiseShield(app: Express, options: ShieldOptions): void {
  const isHttps = options.publicUrl?.startsWith('https:') ?? false;
  app.disable('x-powered-by');
  app.set('trust proxy', options.trustedProxies);
  app.set('query parser', 'simple');
  app.use((_req, res, next) => {
    const requestId = randomUUID();
    res.locals['requestId'] = requestId;
    res.set('X-Request-Id', requestId);
    next();
  });
  app.use(helmet({
    contentSecurityPolicy: {
      useDefaults: false,
      directives: {
        'default-src': ["'self'"],
        'base-uri': ["'self'"],
        'form-action': ["'self'"],
        'frame-ancestors': ["'none'"],
        'object-src': ["'none'"],
        'script-src': ["'self'", "'wasm-unsafe-eval'"],
        // Workers of the replay may be made from blobs; React writes style attributes.
        'worker-src': ["'self'", 'blob:'],
        'style-src': ["'self'", "'unsafe-inline'"],
        'img-src': ["'self'", 'data:', 'blob:'],
        'font-src': ["'self'", 'data:'],
        // 'self' covers the live socket too: same host, ws for http and wss for https (CSP level 3).
        'connect-src': ["'self'"],
      },
    },
    strictTransportSecurity: isHttps ? { maxAge: 31_536_000 } : false,
    crossOriginEmbedderPolicy: false,
    // With no-referrer browsers say `Origin: null` on changes, even to their own server (Fetch standard).
    referrerPolicy: { policy: 'same-origin' },
  }));
}

/** Neither database nor digests can hold these: null characters, and halves of a surrogate pair. */
const unstorable = /\0|\p{Surrogate}/u;

export const jsonBody = (): RequestHandler => express.json({
  limit: bodyLimitBytes,
  strict: false,
  reviver: (name: string, value: unknown) => {
    if (unstorable.test(name) || (typeof value === 'string' && unstorable.test(value))) throw new SyntaxError('unstorable text');
    return value;
  },
});

const hostOf = (url: string | undefined): string | null => {
  try {
    return url === undefined ? null : new URL(url).host;
  } catch {
    return null;
  }
};

/** True when a browser's request comes from a page of this server; programs outside browsers send no origin. */
export function isSameOrigin(headers: { origin?: string | undefined; host?: string | undefined }, publicUrl: string | undefined): boolean {
  if (headers.origin === undefined) return true;
  const host = hostOf(headers.origin);
  return host !== null && (host === headers.host || host === hostOf(publicUrl));
}

/** Changes from pages of other sites are refused, whatever cookies the browser adds. */
export function sameOriginChanges(publicUrl: string | undefined): RequestHandler {
  return (req, _res, next) => {
    const changes = req.method !== 'GET' && req.method !== 'HEAD' && req.method !== 'OPTIONS';
    if (changes && !isSameOrigin(req.headers, publicUrl)) throw refuse('ORIGIN');
    next();
  };
}

export interface RateOptions {
  windowMs: number;
  /** Attempts in the window. */
  limit: number;
  /** Only failures count: a lab behind one address signs in often. */
  failuresOnly: boolean;
}

export const rates = (options: RateOptions): RequestHandler => rateLimit({
  windowMs: options.windowMs,
  limit: options.limit,
  skipSuccessfulRequests: options.failuresOnly,
  standardHeaders: 'draft-8',
  legacyHeaders: false,
  handler: (_req, res) => sendProblem(res, refuse('TOO_MANY')),
});

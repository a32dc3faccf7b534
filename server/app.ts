/**
 * The whole server, put together: database and bus below, recorder, rooms and features on them, HTTP and both sockets
 * on one port.
 */
import { createServer, type IncomingMessage, type Server } from 'node:http';
import type { Duplex } from 'node:stream';
import { fileURLToPath } from 'node:url';
import type { Logger } from 'pino';
import type { LinkOptions } from '@shared/link';
import { PublicAddress } from './address';
import { type Analysis, createAnalysis } from './analysis';
import { createApi, defaultRateLimits, type RateLimits } from './api';
import { createGate } from './auth';
import type { Config } from './config';
import type { OpenDatabase } from './db/engine';
import type { DemoSignIn } from './features/people';
import { createTrialBook } from './features/sessions';
import { describeFault, isSameOrigin } from './http';
import { createDeviceLink, type DeviceLink } from './ingest';
import { listenOn } from './listen';
import { createLive } from './live';
import { type Bus, createBus } from './live/bus';
import { createServices, type Services } from './services';

export interface TautbookOptions {
  config: Config;
  /** Open and migrated; who opened it closes it, after `close`. */
  open: OpenDatabase;
  log: Logger;
  /** Demo lab: how one can sign in. The screens show it. */
  demo?: readonly DemoSignIn[];
  link?: Partial<LinkOptions>;
  rateLimits?: Partial<RateLimits>;
  clientDirectory?: string;
  /** Check every answer against its contract: for tests. */
  checkResponses?: boolean;
}

export interface Tautbook {
  readonly server: Server;
  readonly services: Services;
  readonly bus: Bus;
  readonly link: DeviceLink;
  readonly analysis: Analysis;
  /** @throws StartRefusal PORT_BUSY */
  listen(): Promise<{ url: string }>;
  /** One-time code that makes the first administrator; null when there is one. */
  setupCode(): Promise<string | null>;
  /** Ends connections, makes durable what has arrived. The database stays open. */
  close(): Promise<void>;
}

/** ms that running requests get to finish when the server closes. */
const patienceAtCloseMs = 3_000;

const builtClient = fileURLToPath(new URL('../dist/client', import.meta.url));

export async function createTautbook(options: TautbookOptions): Promise<Tautbook> {
  const { config, log, open: { db } } = options;
  const onFault = (error: unknown) => log.error({ fault: describeFault(error) }, 'a listener failed');
  const bus = createBus(onFault);
  const address = new PublicAddress(config);
  const gate = createGate(db, options.demo !== undefined);

  const link = await createDeviceLink({ db, bus, book: createTrialBook(db, bus), log, ...(options.link ? { options: options.link } : {}) });
  const analysis = await createAnalysis({ db, bus, log });
  const services = await createServices({ db, bus, control: link, log, config, publicUrl: () => address.url, demo: options.demo });
  await services.imports.sweep();
  const live = createLive({
    bus,
    onFault,
    noteFor: services.notes.noteFor,
    mayEnter: (person, room) => gate.mayEnter(person, room),
    whoIs: async (req) => (await services.desk.whoIs(req.headers, false))?.person ?? null,
    isOwnPage: (req) => isSameOrigin(req.headers, config.publicUrl),
  });
  const api = createApi({
    db, services, gate, log,
    publicUrl: config.publicUrl,
    trustedProxies: config.trustedProxies,
    clientDirectory: options.clientDirectory ?? builtClient,
    rateLimits: { ...defaultRateLimits, ...options.rateLimits },
    checkResponses: options.checkResponses ?? false,
    onAccessChanged: () => live.reexamine(),
  });

  const server = createServer(api);
  server.on('upgrade', (req, socket, head) => doorOf(req, { '/link/v1': link, '/live/v1': live })(req, socket, head));

  return {
    server, services, bus, link, analysis,
    setupCode: () => services.people.setupCode(),
    async listen() {
      address.listensOn(await listenOn(server, config));
      return { url: address.url };
    },
    async close() {
      live.close();
      await link.close();
      await analysis.close();
      await closeServer(server);
      await services.post.close();
    },
  };
}

type Upgrade = (req: IncomingMessage, socket: Duplex, head: Buffer) => void;

const noSuchDoor: Upgrade = (_req, socket) => {
  socket.on('error', () => socket.destroy());
  socket.end('HTTP/1.1 404 Not Found\r\nContent-Length: 0\r\nConnection: close\r\n\r\n');
};

function doorOf(req: IncomingMessage, doors: Record<string, { handleUpgrade: Upgrade }>): Upgrade {
  const door = doors[(req.url ?? '').split('?')[0] ?? ''];
  return door ? (...all) => door.handleUpgrade(...all) : noSuchDoor;
}

function closeServer(server: Server): Promise<void> {
  if (!server.listening) return Promise.resolve();
  return new Promise((resolve) => {
    const impatience = setTimeout(() => server.closeAllConnections(), patienceAtCloseMs);
    server.close(() => {
      clearTimeout(impatience);
      resolve();
    });
    server.closeIdleConnections();
  });
}

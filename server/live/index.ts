/** The live socket of the browser: `GET /live/v1`, signed in by cookie, from our own pages only. */
import type { IncomingMessage } from 'node:http';
import type { Duplex } from 'node:stream';
import { WebSocketServer } from 'ws';
import { liveFromClient } from '@shared/api/live';
import type { SignedIn } from '../auth';
import { Rooms, type RoomsParts, send, type Viewer } from './rooms';

export { createBus, type Bus, type BusEvents } from './bus';

export interface LiveParts extends RoomsParts {
  whoIs(req: IncomingMessage): Promise<SignedIn | null>;
  /** Rooms that do not exist and rooms that are closed to the person read the same. */
  mayEnter(person: SignedIn, room: string): Promise<boolean>;
  /** Does the page that asks belong to this Tautbook? */
  isOwnPage(req: IncomingMessage): boolean;
}

export interface Live {
  handleUpgrade(req: IncomingMessage, socket: Duplex, head: Buffer): void;
  /** Somebody's access changed: who may no longer be where they are has to leave. */
  reexamine(): void;
  close(): void;
}

const PING_EVERY_MS = 20_000;
const MESSAGE_BYTES = 4_096;

export function createLive(parts: LiveParts): Live {
  const rooms = new Rooms(parts);
  const sockets = new WebSocketServer({ noServer: true, maxPayload: MESSAGE_BYTES, perMessageDeflate: false });
  const alive = new Map<Viewer, boolean>();
  /** Sign-ins also end by themselves, and by other servers of the same database: looked at with every ping. */
  const pings = setInterval(() => {
    reexamine();
    for (const [viewer, answered] of alive) {
      if (!answered) viewer.socket.terminate();
      alive.set(viewer, false);
      viewer.socket.ping();
    }
  }, PING_EVERY_MS);
  pings.unref();

  async function receive(viewer: Viewer, text: string): Promise<void> {
    const message = parse(text);
    if (message === null) return viewer.socket.close(1008, 'not a message of the live socket');
    if (message.type === 'alive') return send(viewer, { type: 'alive' });
    if (message.type === 'leave') return rooms.leave(viewer, message.room);
    if (message.type === 'reading') return rooms.reading(viewer, message.room, message.atS);
    if (!(await isStillSignedIn(viewer))) return;
    if (await parts.mayEnter(viewer.person, message.room)) rooms.join(viewer, message.room);
    else send(viewer, { type: 'refused', room: message.room, code: 'ROOM_UNKNOWN' });
  }

  /** Takes the person as they are now; lets them go when they are signed out. */
  async function isStillSignedIn(viewer: Viewer): Promise<boolean> {
    const person = await parts.whoIs(viewer.request);
    if (person === null) viewer.socket.close(1008, 'signed out');
    else viewer.person = person;
    return person !== null;
  }

  function reexamine(): void {
    for (const viewer of alive.keys()) viewer.inOrder(() => examine(viewer));
  }

  async function examine(viewer: Viewer): Promise<void> {
    if (viewer.socket.readyState !== viewer.socket.OPEN || !(await isStillSignedIn(viewer))) return;
    for (const room of [...viewer.rooms]) {
      if (await parts.mayEnter(viewer.person, room)) continue;
      rooms.leave(viewer, room);
      send(viewer, { type: 'refused', room, code: 'ROOM_UNKNOWN' });
    }
  }

  function welcome(person: SignedIn, req: IncomingMessage, socket: Duplex, head: Buffer): void {
    sockets.handleUpgrade(req, socket, head, (ws) => {
      let queue: Promise<void> = Promise.resolve();
      const viewer: Viewer = { socket: ws, request: req, person, rooms: new Set(), inOrder: (work) => { queue = queue.then(work).catch(parts.onFault); } };
      alive.set(viewer, true);
      ws.on('message', (data: Buffer, isBinary) => {
        if (isBinary) return ws.close(1003, 'text frames only');
        viewer.inOrder(() => receive(viewer, data.toString('utf8')));
      });
      ws.on('pong', () => alive.set(viewer, true));
      ws.on('error', () => undefined); // a broken socket closes, and closing is handled
      ws.on('close', () => {
        alive.delete(viewer);
        viewer.inOrder(() => rooms.leaveAll(viewer));
      });
    });
  }

  return {
    handleUpgrade(req, socket, head) {
      socket.on('error', () => socket.destroy());
      if (!parts.isOwnPage(req)) return refuse(socket, 403, 'Forbidden');
      parts.whoIs(req).then(
        (person) => (person === null ? refuse(socket, 401, 'Unauthorized') : welcome(person, req, socket, head)),
        (error: unknown) => {
          parts.onFault(error);
          refuse(socket, 503, 'Service Unavailable');
        },
      );
    },
    reexamine,
    close() {
      clearInterval(pings);
      rooms.close();
      for (const viewer of alive.keys()) viewer.socket.terminate();
      sockets.close();
    },
  };
}

function parse(text: string) {
  try {
    const parsed = liveFromClient.safeParse(JSON.parse(text));
    return parsed.success ? parsed.data : null;
  } catch {
    return null;
  }
}

const refuse = (socket: Duplex, status: number, title: string): void => {
  socket.end(`HTTP/1.1 ${status} ${title}\r\nContent-Length: 0\r\nConnection: close\r\n\r\n`);
};

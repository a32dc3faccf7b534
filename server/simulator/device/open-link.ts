/** One connection of a device: opened, or refused with a reason; frames out, checked messages in. */
import WebSocket from 'ws';
import { decodeServerMessage, encodeDeviceMessage, faultOfCloseCode, LINK_PATH, LINK_PROTOCOL, type DeviceMessage, type ServerMessage } from '@shared/link';
import { refusedFor, refusedUpgrade, unreachable, type LinkRefusal } from './link-refusal';

/** Bytes that may wait in the socket before the device stops feeding it. */
const FEED_UP_TO = 1_048_576;
/** A refusal's body is read up to here. */
const BODY_MOST = 16_384;

export interface Link {
  send(message: DeviceMessage): void;
  /** False while the socket has more than it can send; `onDrain` tells when it is true again. */
  hungry(): boolean;
  /** Says good-bye. */
  close(): void;
  /** Breaks the connection without a word. */
  cut(): void;
}

export interface LinkEvents {
  onMessage(message: ServerMessage): void;
  onDrain(): void;
  /** @param refusal set when the server closed because of a fatal fault */
  onClosed(refusal: LinkRefusal | null): void;
}

/** `http://host:port` or `ws://…`, with or without the link's path. @throws TypeError for what is no address */
export function linkUrl(url: string): string {
  const parsed = new URL(url);
  parsed.protocol = parsed.protocol.replace(/^http/, 'ws');
  if (parsed.protocol !== 'ws:' && parsed.protocol !== 'wss:') throw new TypeError(`“${url}” is not an http or ws address.`);
  if (!parsed.pathname.endsWith(LINK_PATH)) parsed.pathname = parsed.pathname.replace(/\/$/, '') + LINK_PATH;
  return parsed.href;
}

/** @returns the open connection. @throws LinkRefusal */
export function openLink(url: string, key: string, silenceMs: number, events: LinkEvents): Promise<Link> {
  const socket = new WebSocket(linkUrl(url), LINK_PROTOCOL, { headers: { authorization: `Bearer ${key}` }, perMessageDeflate: false, handshakeTimeout: 10_000 });
  socket.binaryType = 'nodebuffer';
  return new Promise((resolve, reject) => {
    socket.on('unexpected-response', (_request, response) => {
      let body = '';
      response.setEncoding('utf8');
      response.on('data', (part: string) => {
        if (body.length < BODY_MOST) body += part;
      });
      response.on('end', () => {
        reject(refusedUpgrade(url, response.statusCode ?? 0, body));
        socket.terminate();
      });
    });
    // After the opening, 'close' follows every error and says enough.
    socket.on('error', (error: NodeJS.ErrnoException) => reject(unreachable(url, error.code ?? error.message)));
    socket.on('open', () => resolve(attend(socket, silenceMs, events)));
  });
}

function attend(socket: WebSocket, silenceMs: number, events: LinkEvents): Link {
  let heard = performance.now();
  const watch = setInterval(() => {
    if (performance.now() - heard > silenceMs) socket.terminate();
  }, silenceMs / 4);
  socket.on('ping', () => (heard = performance.now()));
  socket.on('message', (data: Buffer, isBinary: boolean) => {
    heard = performance.now();
    const decoded = isBinary ? decodeServerMessage(data) : null;
    // A message of a later version of the link is none of ours; a device goes on without it.
    if (decoded?.ok) events.onMessage(decoded.message);
  });
  socket.on('close', (code: number) => {
    clearInterval(watch);
    const kind = faultOfCloseCode(code);
    events.onClosed(kind ? refusedFor(kind.code) : null);
  });
  return {
    send(message) {
      if (socket.readyState === WebSocket.OPEN) socket.send(encodeDeviceMessage(message), () => events.onDrain());
    },
    hungry: () => socket.readyState === WebSocket.OPEN && socket.bufferedAmount < FEED_UP_TO,
    close: () => socket.close(1000),
    cut: () => socket.terminate(),
  };
}

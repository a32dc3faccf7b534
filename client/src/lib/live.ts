/**
 * One live socket for the whole page (`/live/v1`): rooms are counted, the socket opens with the first and closes after
 * the last. Binary frames (samples of a running trial) go to their listeners as they came and never into React state.
 */
import { useEffect, useRef, useState } from 'react';
import { liveFromServer, type LiveFromClient, type LiveFromServer } from '@shared/api/live';

/** joining: not answered yet; joined; refused: no such room for this reader; broken: the socket is down and is being tried again. */
export type RoomState = 'joining' | 'joined' | 'refused' | 'broken';

export interface RoomListener {
  onMessage?(message: LiveFromServer): void;
  /** One MessagePack map (`liveSamples`); all rooms of the page share the socket, so look at its `trial`. */
  onBytes?(frame: Uint8Array): void;
  onState?(state: RoomState): void;
}

const FIRST_WAIT_MS = 400;
const LONGEST_WAIT_MS = 10_000;
/** After the last room was left: a page that is turned joins the next one in a moment, on the same line. */
const LINGER_MS = 2_000;
const ALIVE_EVERY_MS = 20_000;
/** No word for so long means the line is dead though nobody closed it. */
const SILENCE_MS = 50_000;

const rooms = new Map<string, { listeners: Set<RoomListener>; state: RoomState }>();
let socket: WebSocket | null = null;
let waitMs = FIRST_WAIT_MS;
let retry: ReturnType<typeof setTimeout> | undefined;
let lingering: ReturnType<typeof setTimeout> | undefined;
let beat: ReturnType<typeof setInterval> | undefined;
let lastWordAt = 0;

function tell(message: LiveFromClient): void {
  if (socket?.readyState === WebSocket.OPEN) socket.send(JSON.stringify(message));
}

function setState(room: string, state: RoomState): void {
  const entry = rooms.get(room);
  if (!entry || entry.state === state) return;
  entry.state = state;
  for (const listener of entry.listeners) listener.onState?.(state);
}

function onFrame(data: unknown): void {
  lastWordAt = Date.now();
  if (data instanceof ArrayBuffer) {
    const frame = new Uint8Array(data);
    for (const entry of rooms.values()) for (const listener of entry.listeners) listener.onBytes?.(frame);
    return;
  }
  let body: unknown;
  try {
    body = JSON.parse(String(data));
  } catch {
    return;
  }
  const parsed = liveFromServer.safeParse(body);
  // A message of a newer server is skipped: the book itself is asked over HTTP.
  if (!parsed.success || parsed.data.type === 'alive') return;
  const message = parsed.data;
  if (message.type === 'joined') setState(message.room, 'joined');
  if (message.type === 'refused') setState(message.room, 'refused');
  for (const listener of rooms.get(message.room)?.listeners ?? []) listener.onMessage?.(message);
}

function onBreak(): void {
  clearInterval(beat);
  socket = null;
  for (const room of rooms.keys()) setState(room, 'broken');
  if (rooms.size === 0) return;
  clearTimeout(retry);
  retry = setTimeout(open, waitMs);
  waitMs = Math.min(waitMs * 2, LONGEST_WAIT_MS);
}

function open(): void {
  if (socket !== null || rooms.size === 0) return;
  const address = new URL('/live/v1', location.href);
  address.protocol = address.protocol === 'https:' ? 'wss:' : 'ws:';
  const made = new WebSocket(address);
  made.binaryType = 'arraybuffer';
  socket = made;
  made.onopen = () => {
    waitMs = FIRST_WAIT_MS;
    lastWordAt = Date.now();
    for (const room of rooms.keys()) tell({ type: 'join', room });
    beat = setInterval(() => {
      if (Date.now() - lastWordAt > SILENCE_MS) made.close();
      else tell({ type: 'alive' });
    }, ALIVE_EVERY_MS);
  };
  made.onmessage = (event) => onFrame(event.data);
  made.onclose = () => {
    if (socket === made) onBreak();
  };
}

function hangUp(): void {
  const leaving = socket;
  socket = null;
  clearInterval(beat);
  leaving?.close();
}

/** Joins a room; the last one to leave it leaves it for the page. @returns how to leave */
export function joinRoom(room: string, listener: RoomListener): () => void {
  let entry = rooms.get(room);
  if (entry) {
    entry.listeners.add(listener);
    listener.onState?.(entry.state);
  } else {
    entry = { listeners: new Set([listener]), state: 'joining' };
    rooms.set(room, entry);
    clearTimeout(lingering);
    if (socket === null) open();
    else tell({ type: 'join', room });
  }
  const joined = entry;
  return () => {
    joined.listeners.delete(listener);
    if (joined.listeners.size > 0 || rooms.get(room) !== joined) return;
    rooms.delete(room);
    tell({ type: 'leave', room });
    if (rooms.size > 0) return;
    clearTimeout(retry);
    lingering = setTimeout(hangUp, LINGER_MS);
  };
}

/** Tells the others in a trial's reading room where one's reading line stands. */
export function tellReading(room: string, atS: number): void {
  tell({ type: 'reading', room, atS });
}

/**
 * Listens to a room while the component is there. `onMessage` and `onBytes` may change between renders.
 * @param room null joins nothing
 */
export function useRoom(room: string | null, onMessage: (message: LiveFromServer) => void, onBytes?: (frame: Uint8Array) => void): RoomState {
  const [state, setRoomState] = useState<RoomState>('joining');
  const latest = useRef({ onMessage, onBytes });
  useEffect(() => {
    latest.current = { onMessage, onBytes };
  });
  useEffect(() => {
    if (room === null) return;
    return joinRoom(room, {
      onMessage: (message) => latest.current.onMessage(message),
      onBytes: (frame) => latest.current.onBytes?.(frame),
      onState: setRoomState,
    });
  }, [room]);
  return state;
}

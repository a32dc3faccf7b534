/** A browser's end of the live socket in tests: joins rooms and notes what is said. */
import WebSocket from 'ws';
import type { LiveFromServer } from '@shared/api/live';
import type { HttpClient } from './http-client';

export class LiveViewer {
  readonly heard: LiveFromServer[] = [];
  /** Close code, once the connection is over. */
  readonly gone: Promise<number>;
  private wake: () => void = () => undefined;

  private constructor(private readonly socket: WebSocket) {
    this.gone = new Promise((resolve) => socket.once('close', resolve));
    socket.on('message', (data: Buffer, isBinary) => {
      if (isBinary) return;
      this.heard.push(JSON.parse(data.toString()) as LiveFromServer);
      this.wake();
    });
  }

  /** @returns null when the server does not open the socket */
  static async open(url: string, client: HttpClient): Promise<LiveViewer | null> {
    const socket = new WebSocket(`${url.replace(/^http/, 'ws')}/live/v1`, { headers: { origin: url, ...(client.cookie ? { cookie: client.cookie } : {}) } });
    const viewer = new LiveViewer(socket);
    return new Promise((resolve) => {
      socket.once('open', () => resolve(viewer));
      socket.once('error', () => resolve(null));
    });
  }

  /** The next message of this type about this room, from `since` on. */
  async next(room: string, types: readonly LiveFromServer['type'][], since = 0): Promise<LiveFromServer> {
    for (;;) {
      const found = this.heard.slice(since).find((message) => types.includes(message.type) && 'room' in message && message.room === room);
      if (found) return found;
      await new Promise<void>((resolve) => { this.wake = resolve; });
    }
  }

  /** @returns whether it was let in */
  async join(room: string): Promise<boolean> {
    const since = this.heard.length;
    this.socket.send(JSON.stringify({ type: 'join', room }));
    return (await this.next(room, ['joined', 'refused'], since)).type === 'joined';
  }

  leave(): void {
    this.socket.terminate();
  }
}

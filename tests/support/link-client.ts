/** A device's end of the link in tests: sends what it is told, right or wrong, and waits for what the server says. */
import { WebSocket } from 'ws';
import {
  decodeServerMessage, type DeviceMessage, encodeDeviceMessage, float32Block, LINK_PATH, LINK_PROTOCOL, type ServerMessage, uint32Block,
} from '@shared/link';
import { channelNames } from '@shared/recording';

export const heronChannels = channelNames(8);

type Of<T extends ServerMessage['type']> = Extract<ServerMessage, { type: T }>;

export class LinkClient {
  readonly heard: ServerMessage[] = [];
  private readonly waiting = new Set<() => void>();
  closed: { code: number } | null = null;
  /** What it says when it is asked for its time, µs. */
  clock: () => number = deviceNowUs;

  private constructor(readonly socket: WebSocket) {
    socket.on('message', (data: Buffer) => {
      const decoded = decodeServerMessage(data);
      if (!decoded.ok) throw new Error(decoded.problem);
      this.heard.push(decoded.message);
      if (decoded.message.type === 'clock') this.send({ type: 'clock', id: decoded.message.id, deviceUs: this.clock() });
      this.wake();
    });
    socket.on('error', () => undefined);
    socket.on('close', (code) => {
      this.closed = { code };
      this.wake();
    });
  }

  /** @throws UpgradeRefusal with status and problem */
  static open(url: string, key: string | null, protocol: string = LINK_PROTOCOL): Promise<LinkClient> {
    return new Promise((resolve, reject) => {
      const socket = new WebSocket(url.replace(/^http/, 'ws') + LINK_PATH, protocol, { perMessageDeflate: false, headers: key === null ? {} : { authorization: `Bearer ${key}` } });
      const client = new LinkClient(socket);
      socket.once('open', () => resolve(client));
      socket.once('unexpected-response', (_req, res) => {
        const parts: Buffer[] = [];
        res.on('data', (part: Buffer) => parts.push(part));
        res.on('end', () => reject(new UpgradeRefusal(res.statusCode ?? 0, res.headers['content-type'] ?? '', Buffer.concat(parts).toString())));
      });
      socket.once('error', reject);
    });
  }

  static async greeted(url: string, key: string, more: Partial<Extract<DeviceMessage, { type: 'hello' }>> = {}): Promise<LinkClient> {
    const client = await LinkClient.open(url, key);
    client.send(hello(more));
    await client.next('welcome');
    return client;
  }

  private wake(): void {
    for (const look of [...this.waiting]) look();
  }

  send(message: DeviceMessage): void {
    this.socket.send(encodeDeviceMessage(message));
  }

  sendBytes(bytes: Uint8Array): void {
    this.socket.send(bytes);
  }

  /** Waits until the condition holds, after each message. */
  until<T>(find: () => T | undefined | null | false, what = 'what was waited for', withinMs = 10_000): Promise<T> {
    return new Promise((resolve, reject) => {
      const late = setTimeout(() => {
        this.waiting.delete(look);
        reject(new Error(`${what} did not come; heard: ${JSON.stringify(this.heard.filter(({ type }) => type !== 'clock').slice(-6))}, closed: ${JSON.stringify(this.closed)}`));
      }, withinMs);
      const look = (): void => {
        const found = find();
        if (found === undefined || found === null || found === false) return;
        clearTimeout(late);
        this.waiting.delete(look);
        resolve(found);
      };
      this.waiting.add(look);
      look();
    });
  }

  /** The first message of a type from `since` on that fits. */
  next<T extends ServerMessage['type']>(type: T, fits: (message: Of<T>) => boolean = () => true, since = 0): Promise<Of<T>> {
    return this.until(() => this.heard.slice(since).find((message): message is Of<T> => message.type === type && fits(message as Of<T>)), type);
  }

  faults(): Of<'fault'>[] {
    return this.heard.filter((message): message is Of<'fault'> => message.type === 'fault');
  }

  acked(run: string): number {
    return Math.max(0, ...this.heard.flatMap((message) => (message.type === 'ack' && message.run === run ? [message.next] : [])));
  }

  /** Everything sent so far was handled: the server answers a message that it can only refuse. */
  async handled(): Promise<void> {
    const since = this.heard.length;
    const run = `nobody-${since}`;
    this.send({ type: 'end', run, batches: 0, samples: 0, reason: 'done' });
    await this.next('fault', (fault) => fault.run === run, since);
  }

  async cut(): Promise<void> {
    this.socket.terminate();
    await this.until(() => this.closed, 'close');
  }
}

export class UpgradeRefusal extends Error {
  constructor(readonly status: number, readonly contentType: string, readonly body: string) {
    super(`refused with ${status}`);
  }

  get problem(): { code: string; status: number; detail: string; wayOut: string } {
    return JSON.parse(this.body) as { code: string; status: number; detail: string; wayOut: string };
  }
}

/** The test device's clock: monotonic, with an origin of its own. */
export const deviceNowUs = (): number => Math.round(performance.now() * 1000) + 1_000_000;

export const hello = (more: Partial<Extract<DeviceMessage, { type: 'hello' }>> = {}): DeviceMessage => ({
  type: 'hello', link: 1, rig: { code: 'heron-8', revision: 1 }, rateHz: 1000, channels: [...heronChannels], firmware: 'test', deviceUs: deviceNowUs(), ...more,
});

/** Sample i of channel c, the same in every test: on no grid, with NaN and negative zero here and there. */
export function valueAt(i: number, c: number): number {
  if ((i * 31 + c * 7) % 97 === 0) return Number.NaN;
  if ((i * 13 + c * 5) % 89 === 0) return -0;
  return Math.fround(Math.sin(i * 0.01 + c) * (c + 1));
}

export const START_US = 5_000_000;

/** Batch n of a run in which every batch has `count` samples at 1 kHz. */
export function testBatch(run: string, n: number, count = 20, more: Partial<Extract<DeviceMessage, { type: 'batch' }>> = {}): Extract<DeviceMessage, { type: 'batch' }> {
  const first = more.first ?? n * count;
  const channels = heronChannels.length;
  const values = new Float32Array(count * channels);
  for (let c = 0; c < channels; c += 1) for (let i = 0; i < count; i += 1) values[c * count + i] = valueAt(n * count + i, c);
  return { type: 'batch', run, n, first, count, t0Us: START_US + first * 1000, data: float32Block(values), ...more };
}

export const dtBlock = (steps: readonly number[]): Uint8Array => uint32Block(Uint32Array.from(steps));

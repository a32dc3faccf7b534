/** A device that a test drives by hand, on the real link: it says hello, and begins, sends and ends what it is told to. */
import WebSocket from 'ws';
import { type Batch, decodeServerMessage, type DeviceMessage, encodeDeviceMessage, LINK_PATH, LINK_PROTOCOL, type ServerMessage } from '@shared/link';
import { channelNames } from '@shared/recording';

export const benchChannels = channelNames(8);
export const benchRateHz = 1000;

export class BenchDevice {
  private readonly inbox: ServerMessage[] = [];
  private wake: () => void = () => undefined;
  /** Close code, once the connection is over. */
  readonly gone: Promise<number>;

  private constructor(private readonly socket: WebSocket) {
    this.gone = new Promise((resolve) => socket.once('close', resolve));
    socket.on('message', (data: Buffer) => {
      const decoded = decodeServerMessage(data);
      if (!decoded.ok) throw new Error(decoded.problem);
      this.inbox.push(decoded.message);
      this.wake();
    });
  }

  static async connect(url: string, key: string, rig: { code: string; revision: number } = { code: 'heron-8', revision: 1 }): Promise<BenchDevice> {
    const socket = new WebSocket(url.replace(/^http/, 'ws') + LINK_PATH, LINK_PROTOCOL, { headers: { authorization: `Bearer ${key}` } });
    const device = new BenchDevice(socket);
    await new Promise((resolve, reject) => {
      socket.once('open', resolve);
      socket.once('error', reject);
    });
    device.send({ type: 'hello', link: 1, rig, rateHz: benchRateHz, channels: benchChannels, firmware: 'bench', deviceUs: 0 });
    await device.hear('welcome');
    return device;
  }

  send(message: DeviceMessage): void {
    this.socket.send(encodeDeviceMessage(message));
  }

  /** The next message of this type; others before it are passed over. */
  async hear<T extends ServerMessage['type']>(type: T): Promise<Extract<ServerMessage, { type: T }>> {
    for (;;) {
      const place = this.inbox.findIndex((message) => message.type === type);
      const [found] = place >= 0 ? this.inbox.splice(0, place + 1).slice(-1) : [];
      if (found) return found as Extract<ServerMessage, { type: T }>;
      await new Promise<void>((resolve) => { this.wake = resolve; });
    }
  }

  /** Begins the trial that is armed, sends one batch of `samples`, and waits until it is durable. */
  async begin(trial: string, run: string, samples: number): Promise<void> {
    this.send({ type: 'begin', trial, run, startUs: 0 });
    await this.hear('ack');
    this.send(batchOf(run, samples));
    while ((await this.hear('ack')).next < 1);
  }

  /** Goes on with a run after `begin`, also over another connection: one more batch of `samples`, until it is durable. */
  async goOn(run: string, samples: number): Promise<void> {
    this.send(batchOf(run, samples, 1));
    while ((await this.hear('ack')).next < 2);
  }

  async end(run: string, samples: number, reason: 'done' | 'stopped' = 'done', batches = 1): Promise<void> {
    this.send({ type: 'end', run, batches, samples, reason });
    while (!(await this.hear('ack')).ended);
  }

  async leave(): Promise<void> {
    this.socket.close();
    await this.gone;
  }
}

/** A hand that does not move, every cable at 5 N, lengths not measured: nothing to flag. */
function batchOf(run: string, count: number, n = 0): Batch {
  const values = new Float32Array(benchChannels.length * count);
  const rest: Record<string, number> = { z_m: 0.28, qw: 1, grasp: 0.02 };
  benchChannels.forEach((channel, c) => values.fill(rest[channel] ?? (channel.endsWith('_N') ? 5 : channel.startsWith('l') ? Number.NaN : 0), c * count, (c + 1) * count));
  const first = n * count;
  return { type: 'batch', run, n, first, count, t0Us: (first / benchRateHz) * 1e6, data: new Uint8Array(values.buffer) };
}

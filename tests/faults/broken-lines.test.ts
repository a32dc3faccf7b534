/** The line is reset in the middle of frames, in both directions, again and again: one recording, every sample once, in order. */
import { connect, createServer, type AddressInfo, type Server, type Socket } from 'node:net';
import { afterAll, beforeAll, expect, it } from 'vitest';
import { channelNames } from '@shared/recording';
import { parseRig } from '@shared/rig';
import { createSimulatedDevice, simulateRun } from '@server/simulator';
import { heronFile } from '../support/app';
import { differences } from '../support/link-compare';
import { openLinkLab, type LinkLab } from '../support/link-lab';
import { seededRandom } from './seeded-random';

let lab: LinkLab;
beforeAll(async () => { lab = await openLinkLab(); });
afterAll(() => lab.close());

/** A line to the server that is reset (RST, no good-bye) after so many bytes of one of its directions. */
class BadLine {
  resets = 0;
  private readonly server: Server;
  private readonly ends = new Set<Socket>();
  private readonly random = seededRandom(99);

  constructor(private readonly to: number, private readonly most: number) {
    this.server = createServer((from) => this.carry(from));
  }

  async url(): Promise<string> {
    await new Promise<void>((resolve) => this.server.listen(0, '127.0.0.1', resolve));
    return `http://127.0.0.1:${(this.server.address() as AddressInfo).port}`;
  }

  private carry(device: Socket): void {
    const server = connect(this.to, '127.0.0.1');
    for (const end of [device, server]) {
      this.ends.add(end);
      end.on('error', () => undefined);
      end.on('close', () => this.ends.delete(end));
    }
    const upstream = this.random() < 0.8;
    // Devices send a hundred times what they get. The upgrade is a few hundred bytes each way.
    let left = this.resets < this.most ? 600 + Math.floor(this.random() * (upstream ? 250_000 : 1_500)) : Number.POSITIVE_INFINITY;
    const pass = (from: Socket, to: Socket, counted: boolean) => {
      from.on('data', (data: Buffer) => {
        if (counted && data.length >= left) {
          to.write(data.subarray(0, left), () => {
            this.resets += 1;
            device.resetAndDestroy();
            server.resetAndDestroy();
          });
          left = Number.POSITIVE_INFINITY;
          from.pause();
          return;
        }
        if (counted) left -= data.length;
        to.write(data);
      });
      from.on('close', () => to.destroy());
    };
    pass(device, server, upstream);
    pass(server, device, !upstream);
  }

  close(): void {
    this.server.close();
    for (const end of this.ends) end.destroy();
  }
}

it('comes to the right recordings of three devices over a line that was reset forty times', { timeout: 180_000 }, async () => {
  const line = new BadLine(Number(new URL(lab.url).port), 40);
  const url = await line.url();
  const ids = [await lab.device(), await lab.device(), await lab.device()];
  const devices = ids.map(({ key }, i) => createSimulatedDevice({
    url, key, rig: { code: 'heron-8', revision: 1 }, channels: channelNames(8), seed: i, speed: 4, keepSamples: true, reconnectMs: [5, 20], upsets: { lose: 0.02, repeat: 0.02 },
    source: () => simulateRun({ rig: parseRig(heronFile), task: 'press', seed: 50 + i, durationS: 3600, chunkSamples: 20, troubles: [{ kind: 'gap', atS: 3, durationS: 0.2 }] }),
  }));
  for (const device of devices) {
    // The line may be reset before the welcome: a device that starts has to try again itself.
    while (device.state === 'idle') await device.connect().catch(() => undefined);
    device.startUnfiled();
  }
  await expect.poll(() => line.resets, { timeout: 120_000 }).toBeGreaterThanOrEqual(40);
  for (const device of devices) device.stop('done');
  await Promise.all(devices.map((device) => device.settled()));
  for (const [i, device] of devices.entries()) {
    const [run] = device.report().runs;
    expect(run).toMatchObject({ state: 'closed', acknowledgedSamples: run?.samples });
    const recording = await lab.recording((ids[i] as { id: typeof ids[0]['id'] }).id, run?.run ?? '');
    expect(recording).toMatchObject({ state: 'closed', endReason: 'done', samples: run?.samples });
    expect(recording.gaps).toHaveLength(1); // the one that the device itself made
    expect(differences(await lab.samples(recording.id), device.samplesOf(run?.run ?? ''))).toEqual([]);
  }
  await Promise.all(devices.map((device) => device.close(0)));
  line.close();
});

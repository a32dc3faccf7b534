/** The database fails at the commit: acknowledgements stop, the device keeps what it has, and when storage is back nothing is missing. */
import { afterEach, expect, describe, it } from 'vitest';
import { eq } from 'drizzle-orm';
import { channelNames } from '@shared/recording';
import { faultKinds } from '@shared/link';
import { parseRig } from '@shared/rig';
import type { Database } from '@server/db/engine';
import { recordingChunks } from '@server/db/schema';
import { createSimulatedDevice, simulateRun } from '@server/simulator';
import { heronFile } from '../support/app';
import { hello, LinkClient, START_US, testBatch } from '../support/link-client';
import { differences } from '../support/link-compare';
import { openLinkLab, type LinkLab } from '../support/link-lab';

/** Where a transaction goes wrong: before its first statement, at its commit, or behind it, when only the answer is lost. */
type Where = 'before' | 'at' | 'behind';

class BadDisk {
  where: Where | null = null;
  tries = 0;
  /** What else fails: null, or statements outside transactions. */
  everything = false;

  around = (db: Database): Database => new Proxy(db, {
    get: (target, name, receiver) => {
      if (name === 'transaction') return (work: Parameters<Database['transaction']>[0]) => this.transaction(target, work);
      if (this.everything && (name === 'insert' || name === 'select' || name === 'update')) throw new Error('the disk is gone');
      return Reflect.get(target, name, receiver) as unknown;
    },
  });

  private async transaction(db: Database, work: Parameters<Database['transaction']>[0]): Promise<unknown> {
    const { where } = this;
    if (where !== null) this.tries += 1;
    if (where === 'before') throw new Error('no space left on the disk');
    const done = await db.transaction(async (tx) => {
      const result = await work(tx);
      if (where === 'at') throw new Error('could not write to the disk');
      return result;
    });
    if (where === 'behind') throw new Error('the connection was lost');
    return done;
  }
}

let lab: LinkLab;
afterEach(() => lab.close());

describe.each<Where>(['before', 'at', 'behind'])('a commit that fails %s its end', (where) => {
  it('is tried again until it works; devices hear STORAGE once, hold back, and lose nothing', { timeout: 60_000 }, async () => {
    const disk = new BadDisk();
    lab = await openLinkLab({}, disk.around);
    const { id, key } = await lab.device();
    const client = await LinkClient.greeted(lab.url, key);
    client.send({ type: 'begin', trial: null, run: 'r', startUs: START_US });
    for (let n = 0; n < 30; n += 1) client.send(testBatch('r', n));
    await client.until(() => client.acked('r') === 30, 'acknowledgement before the failure');

    disk.where = where;
    for (let n = 30; n < 90; n += 1) client.send(testBatch('r', n)); // across the end of a chunk
    expect(await client.next('fault')).toMatchObject({ code: 'STORAGE', fatal: false });
    expect(await client.next('pace')).toMatchObject({ unacked: 16 });
    const { tries } = disk;
    await expect.poll(() => disk.tries).toBeGreaterThan(tries + 3);
    for (let n = 90; n < 120; n += 1) client.send(testBatch('r', n));
    client.send({ type: 'end', run: 'r', batches: 120, samples: 2400, reason: 'done' });
    await expect.poll(() => disk.tries).toBeGreaterThan(tries + 6);
    expect(client.acked('r')).toBe(30);
    expect(client.faults()).toHaveLength(1);

    const since = client.heard.length;
    disk.where = null;
    expect(await client.next('ack', ({ ended }) => ended === true)).toMatchObject({ next: 120 });
    expect(await client.next('pace', () => true, since)).toMatchObject({ unacked: 256 });
    const recording = await lab.recording(id, 'r');
    expect(recording).toMatchObject({ state: 'closed', samples: 2400, gaps: [] });
    const sent = Array.from({ length: 120 }, (_, n) => testBatch('r', n)).map(({ data, count, first }) => {
      const values = new Float32Array(Uint8Array.from(data).buffer);
      return { first, count, timesUs: Float64Array.from({ length: count }, (_, i) => (first + i) * 1000), columns: channelNames(8).map((_, c) => values.subarray(c * count, (c + 1) * count)) };
    });
    expect(differences(await lab.samples(recording.id), sent)).toEqual([]);
    const chunks = await lab.db.select({ count: recordingChunks.count }).from(recordingChunks).where(eq(recordingChunks.recordingId, recording.id));
    expect(chunks.reduce((sum, { count }) => sum + count, 0)).toBe(2400);
    await client.cut();
    await expect.poll(() => lab.faultsOf(id)).toEqual({ STORAGE: 1 });
  });
});

it('what fails outside a commit ends the connection with STORAGE, and the device comes back to the right recordings', { timeout: 60_000 }, async () => {
  const disk = new BadDisk();
  lab = await openLinkLab({}, disk.around);
  const { key } = await lab.device();
  const client = await LinkClient.open(lab.url, key);
  client.send(hello());
  await client.next('welcome');
  disk.everything = true;
  client.send({ type: 'begin', trial: null, run: 'r', startUs: START_US });
  expect(await client.next('fault')).toMatchObject({ code: 'STORAGE', fatal: true, run: 'r' });
  await client.until(() => client.closed, 'close');
  expect(client.closed).toEqual({ code: faultKinds.STORAGE.closeCode });
  // At the door it is said in HTTP: the device tries again later.
  const refused = await LinkClient.open(lab.url, key).catch((error: unknown) => error);
  expect(refused).toMatchObject({ status: 503 });
  disk.everything = false;
  const again = await LinkClient.greeted(lab.url, key);
  again.send({ type: 'begin', trial: null, run: 'r', startUs: START_US });
  expect(await again.next('ack')).toMatchObject({ run: 'r', next: 0 });
  await again.cut();
});

it('an outage while simulated devices stream costs nothing but time', { timeout: 240_000 }, async () => {
  const disk = new BadDisk();
  lab = await openLinkLab({}, disk.around);
  const ids = [await lab.device(), await lab.device(), await lab.device()];
  const devices = ids.map(({ key }, i) => createSimulatedDevice({
    url: lab.url, key, rig: { code: 'heron-8', revision: 1 }, channels: channelNames(8), seed: i, speed: 3, keepSamples: true, reconnectMs: [5, 20], upsets: { lose: 0.02, breakEveryS: 2 },
    source: () => simulateRun({ rig: parseRig(heronFile), task: 'trace', seed: 70 + i, durationS: 3600, chunkSamples: 20 }),
  }));
  for (const device of devices) {
    // The link may break before the welcome: a device that starts has to try again itself.
    while (device.state === 'idle') await device.connect().catch(() => undefined);
    device.startUnfiled();
  }
  const acknowledged = () => devices.flatMap((device) => device.report().runs).reduce((sum, run) => sum + run.acknowledgedBatches, 0);
  for (const where of ['before', 'behind', 'at', 'before'] as const) {
    const before = acknowledged();
    await expect.poll(acknowledged, { timeout: 60_000 }).toBeGreaterThan(before + 300);
    const { tries } = disk;
    disk.where = where;
    await expect.poll(() => disk.tries, { timeout: 60_000 }).toBeGreaterThan(tries + 15);
    disk.where = null;
  }
  for (const device of devices) device.stop('done');
  await Promise.all(devices.map((device) => device.settled()));
  for (const [i, device] of devices.entries()) {
    const [run] = device.report().runs;
    const recording = await lab.recording((ids[i] as typeof ids[0]).id, run?.run ?? '');
    expect(recording).toMatchObject({ state: 'closed', samples: run?.samples });
    expect(differences(await lab.samples(recording.id), device.samplesOf(run?.run ?? ''))).toEqual([]);
  }
  await Promise.all(devices.map((device) => device.close(0)));
});

/** What the recorder promises a device: acknowledged is durable, a break costs nothing, a recording is closed once and true. */
import { createHash } from 'node:crypto';
import { afterAll, afterEach, beforeAll, describe, expect, it } from 'vitest';
import { eq } from 'drizzle-orm';
import type { DeviceId } from '@shared/api/common';
import { type Chunk, recordingSummer, sampleHasher } from '@shared/recording';
import { devices, recordingChunks, recordingPyramid, recordingTail } from '@server/db/schema';
import { openLinkLab, type LinkLab } from '../support/link-lab';
import { deviceNowUs, dtBlock, heronChannels, hello, LinkClient, START_US, testBatch, valueAt } from '../support/link-client';

let lab: LinkLab;
const clients: LinkClient[] = [];
beforeAll(async () => { lab = await openLinkLab(); });
afterEach(async () => {
  await Promise.all(clients.splice(0).map((client) => client.cut()));
  lab.told.length = 0;
});
afterAll(() => lab.close());

async function greeted(key: string, more: Parameters<typeof hello>[0] = {}): Promise<LinkClient> {
  const client = await LinkClient.greeted(lab.url, key, more);
  clients.push(client);
  return client;
}

async function begun(run: string): Promise<{ device: { id: DeviceId; key: string }; client: LinkClient }> {
  const device = await lab.device();
  const client = await greeted(device.key);
  client.send({ type: 'begin', trial: null, run, startUs: START_US });
  await client.next('ack', (ack) => ack.run === run);
  return { device, client };
}

async function stream(client: LinkClient, run: string, from: number, to: number, count = 20): Promise<void> {
  for (let n = from; n < to; n += 1) client.send(testBatch(run, n, count));
  await client.until(() => client.acked(run) >= to, `acknowledgement of ${to}`);
}

async function ended(client: LinkClient, run: string, batches: number, samples: number, reason: 'done' | 'stopped' | 'fault' = 'done'): Promise<void> {
  client.send({ type: 'end', run, batches, samples, reason });
  await client.next('ack', (ack) => ack.run === run && ack.ended === true);
}

/** Every bit of every stored sample beside what was sent. */
function expectSamples(chunks: readonly Chunk[], samples: number): void {
  expect(chunks.reduce((sum, { count }) => sum + count, 0)).toBe(samples);
  let i = 0;
  const wrong: string[] = [];
  for (const { first, count, timesUs, columns } of chunks) {
    expect(first).toBe(i);
    for (let k = 0; k < count; k += 1, i += 1) {
      if (timesUs[k] !== i * 1000) wrong.push(`time of sample ${i}: ${timesUs[k]}`);
      for (let c = 0; c < heronChannels.length; c += 1) if (!Object.is(columns[c]?.[k], valueAt(i, c))) wrong.push(`sample ${i} of channel ${c}`);
    }
  }
  expect(wrong).toEqual([]);
}

describe('acknowledgement', () => {
  it('says of begin that batch 0 is wanted, and of a batch that it is in the database', async () => {
    const { device, client } = await begun('a');
    expect(client.acked('a')).toBe(0);
    await stream(client, 'a', 0, 1);
    const recording = await lab.recording(device.id, 'a');
    expect(recording).toMatchObject({ state: 'growing', nextBatch: 1, samples: 20 });
    expectSamples(await lab.samples(recording.id), 20);
  });

  it('is given again for a batch that came before, which is stored once', async () => {
    const { device, client } = await begun('twice');
    await stream(client, 'twice', 0, 3);
    const since = client.heard.length;
    for (const n of [0, 2, 1]) client.send(testBatch('twice', n));
    expect(await client.next('ack', () => true, since)).toMatchObject({ next: 3 });
    await ended(client, 'twice', 3, 60);
    expectSamples(await lab.samples((await lab.recording(device.id, 'twice')).id), 60);
  });

  it('of the end comes when the recording is closed, and again when end is sent again', async () => {
    const { device, client } = await begun('end');
    await stream(client, 'end', 0, 2);
    await ended(client, 'end', 2, 40, 'stopped');
    expect(await lab.recording(device.id, 'end')).toMatchObject({ state: 'closed', endReason: 'stopped' });
    const since = client.heard.length;
    client.send({ type: 'end', run: 'end', batches: 2, samples: 40, reason: 'stopped' });
    expect(await client.next('ack', () => true, since)).toMatchObject({ next: 2, ended: true });
  });

  it('is given again for what comes once more after the end: the beginning, a batch, a mark', async () => {
    const { client } = await begun('late');
    client.send({ type: 'mark', run: 'late', atUs: START_US + 1000, label: 'here' });
    await stream(client, 'late', 0, 3);
    await ended(client, 'late', 3, 60);
    for (const message of [{ type: 'begin', trial: null, run: 'late', startUs: START_US } as const, testBatch('late', 1), { type: 'mark', run: 'late', atUs: START_US + 1000, label: 'here' } as const]) {
      const since = client.heard.length;
      client.send(message);
      expect(await client.next('ack', () => true, since)).toMatchObject({ run: 'late', next: 3, ended: true });
    }
    expect(client.faults()).toEqual([]);
  });

  it('is not taken back by batches that are repeated while the run is being closed', async () => {
    const { device, client } = await begun('closing');
    // In one go, as a device sends that was asked twice for the same batch.
    for (const n of [0, 1]) client.send(testBatch('closing', n));
    client.send({ type: 'end', run: 'closing', batches: 2, samples: 40, reason: 'done' });
    for (const n of [0, 1]) client.send(testBatch('closing', n));
    client.send({ type: 'end', run: 'closing', batches: 2, samples: 40, reason: 'done' });
    await client.next('ack', (ack) => ack.ended === true);
    expect(client.faults()).toEqual([]);
    expectSamples(await lab.samples((await lab.recording(device.id, 'closing')).id), 40);
  });
});

describe('a recording', () => {
  it('becomes chunks of about a second, a pyramid and no tail, with digest and statistics over the samples', async () => {
    const { device, client } = await begun('long');
    for (let n = 0; n < 250; n += 50) await stream(client, 'long', n, n + 50);
    await ended(client, 'long', 250, 5000);
    const recording = await lab.recording(device.id, 'long');
    const rows = await lab.db.select().from(recordingChunks).where(eq(recordingChunks.recordingId, recording.id));
    expect(rows.length).toBeGreaterThanOrEqual(3);
    for (const { count } of rows.slice(0, -1)) expect(count).toBeGreaterThanOrEqual(1000);
    for (const { count } of rows) expect(count).toBeLessThanOrEqual(2000);
    expect(await lab.db.select().from(recordingTail).where(eq(recordingTail.recordingId, recording.id))).toEqual([]);
    expect((await lab.db.select().from(recordingPyramid).where(eq(recordingPyramid.recordingId, recording.id))).length).toBeGreaterThan(0);

    const chunks = await lab.samples(recording.id);
    expectSamples(chunks, 5000);
    const hash = createHash('sha256');
    const hasher = sampleHasher(heronChannels, hash);
    const summer = recordingSummer(heronChannels.length, 1000);
    // In one piece, as anybody would who has the samples: the digest does not know of chunks.
    const whole: Chunk = { first: 0, count: 5000, timesUs: Float64Array.from({ length: 5000 }, (_, i) => i * 1000), columns: heronChannels.map((_, c) => Float32Array.from({ length: 5000 }, (_, i) => valueAt(i, c))) };
    hasher.push(whole);
    summer.push(whole);
    expect(recording.digest).toBe(hash.digest('hex'));
    const { minimum, maximum, mean, measured } = summer.result().channels[9] ?? {};
    const stored = recording.statistics?.['t2_N'];
    expect(stored).toMatchObject({ min: minimum, max: maximum, missing: 5000 - (measured ?? 0) });
    expect(stored?.mean).toBeCloseTo(mean ?? 0, 12);
    expect(recording).toMatchObject({ samples: 5000, nextSample: 5000, lastUs: 4_999_000, gaps: [] });
  });

  it('lists what the device lost as gaps, by its own count, and invents nothing', async () => {
    const { device, client } = await begun('gaps');
    client.send(testBatch('gaps', 0, 20, { first: 5, t0Us: START_US + 5000 })); // five lost before anything came
    client.send(testBatch('gaps', 1, 20, { first: 32, t0Us: START_US + 32_000 })); // seven lost
    client.send(testBatch('gaps', 2, 2, { first: 52, t0Us: START_US + 52_000, dtUs: dtBlock([0, 1400]) })); // late, but within one and a half periods
    await ended(client, 'gaps', 3, 42);
    const recording = await lab.recording(device.id, 'gaps');
    expect(recording.gaps).toEqual([{ startS: 0, endS: 0.005, missing: 5 }, { startS: 0.024, endS: 0.032, missing: 7 }]);
    expect(recording).toMatchObject({ samples: 42, nextSample: 54 });
  });

  it('keeps marks with their label, each once', async () => {
    const { device, client } = await begun('marks');
    await stream(client, 'marks', 0, 1);
    for (let i = 0; i < 2; i += 1) client.send({ type: 'mark', run: 'marks', atUs: START_US + 12_000, label: 'object touched' });
    client.send({ type: 'mark', run: 'marks', atUs: START_US - 1, label: 'too early' });
    expect(await client.next('fault')).toMatchObject({ code: 'MALFORMED', run: 'marks' });
    await ended(client, 'marks', 1, 20);
    expect((await lab.recording(device.id, 'marks')).marks).toEqual([{ atS: 0.012, label: 'object touched' }]);
  });

  it('of no samples closes as well', async () => {
    const { device, client } = await begun('empty');
    await ended(client, 'empty', 0, 0);
    expect(await lab.recording(device.id, 'empty')).toMatchObject({ state: 'closed', samples: 0, gaps: [], digest: expect.stringMatching(/^[0-9a-f]{64}$/) });
  });

  it('never changes once it is closed', async () => {
    const { device, client } = await begun('closed');
    await stream(client, 'closed', 0, 2);
    await ended(client, 'closed', 2, 40);
    const before = await lab.recording(device.id, 'closed');
    client.send(testBatch('closed', 2));
    client.send({ type: 'mark', run: 'closed', atUs: START_US, label: 'late' });
    await client.handled();
    expect(await lab.recording(device.id, 'closed')).toEqual(before);
  });

  it('knows when it started by the server’s clock, with a bound that holds', async () => {
    const device = await lab.device();
    const client = await greeted(device.key);
    const before = Date.now();
    const startUs = deviceNowUs();
    client.send({ type: 'begin', trial: null, run: 'clock', startUs });
    client.send(testBatch('clock', 0, 20, { t0Us: startUs }));
    // The burst of eight round trips and a later one.
    await client.until(() => client.heard.filter(({ type }) => type === 'clock').length > 9, 'clock round trips');
    await ended(client, 'clock', 1, 20);
    const after = Date.now();
    const { startedAt, startUncertaintyUs } = await lab.recording(device.id, 'clock');
    const bound = startUncertaintyUs ?? Number.NaN;
    expect(bound).toBeGreaterThan(0);
    expect(bound).toBeLessThan(50_000);
    expect(startedAt.getTime()).toBeGreaterThanOrEqual(before - bound / 1000 - 1);
    expect(startedAt.getTime()).toBeLessThanOrEqual(after + bound / 1000 + 1);
    await expect.poll(async () => (await lab.db.select().from(devices).where(eq(devices.id, device.id)))[0]?.clock).toMatchObject({ offsetUs: expect.any(Number), uncertaintyUs: expect.any(Number) });
  });
});

describe('after a break', () => {
  it('at any byte of the stream the device goes on from what is durable, and nothing is lost or doubled', async () => {
    const device = await lab.device();
    const run = 'bytes';
    let next = 0;
    // The link breaks in the middle of a frame: the bytes of three batches, cut at a place that moves through all of them.
    for (const cutAt of [1, 2, 3, 7, 60, 500, 1900, 1964, 1965, 1966, 3500, 3940, 5000]) {
      const client = await LinkClient.open(lab.url, device.key);
      client.send(hello());
      const welcome = await client.next('welcome');
      const from = welcome.resume.find((each) => each.run === run)?.next;
      if (from === undefined) client.send({ type: 'begin', trial: null, run, startUs: START_US });
      next = from ?? 0;
      await stream(client, run, next, next + 2);
      const raw = (client.socket as unknown as { _socket: { write(bytes: Uint8Array): void } })._socket;
      const frames = await framesOf([0, 1, 2].map((k) => testBatch(run, next + 2 + k)));
      raw.write(frames.subarray(0, cutAt));
      await client.cut();
    }
    const client = await greeted(device.key);
    const welcome = client.heard.find((message) => message.type === 'welcome');
    const from = welcome?.type === 'welcome' ? (welcome.resume[0]?.next ?? 0) : 0;
    // The three of the last flight are sent again, whether they had arrived or not.
    await stream(client, run, from, from + 3);
    await ended(client, run, from + 3, (from + 3) * 20);
    expectSamples(await lab.samples((await lab.recording(device.id, run)).id), (from + 3) * 20);
  });

  it('of the server the device finds its run again, chunks and tail alike', async () => {
    const { device, client } = await begun('restart');
    await stream(client, 'restart', 0, 70);
    await stream(client, 'restart', 70, 75);
    await lab.restart();
    await client.until(() => client.closed, 'close');
    const again = await greeted(device.key);
    expect(again.heard[0]).toMatchObject({ type: 'welcome', resume: [{ run: 'restart', next: 75 }] });
    await stream(again, 'restart', 75, 130);
    await ended(again, 'restart', 130, 2600);
    const recording = await lab.recording(device.id, 'restart');
    expectSamples(await lab.samples(recording.id), 2600);
    const hash = createHash('sha256');
    const hasher = sampleHasher(heronChannels, hash);
    for (const chunk of await lab.samples(recording.id)) hasher.push(chunk);
    expect(recording.digest).toBe(hash.digest('hex'));
  });

  it('a run that ended meanwhile comes to one closed recording, and the next one can begin beside it', async () => {
    const { device, client } = await begun('first');
    await stream(client, 'first', 0, 4);
    await client.cut();
    const again = await greeted(device.key);
    again.send({ type: 'begin', trial: null, run: 'second', startUs: START_US });
    await stream(again, 'first', 4, 9);
    await ended(again, 'first', 9, 180);
    await stream(again, 'second', 0, 2);
    await ended(again, 'second', 2, 40);
    expectSamples(await lab.samples((await lab.recording(device.id, 'first')).id), 180);
    expectSamples(await lab.samples((await lab.recording(device.id, 'second')).id), 40);
  });

  it('begin of a run that is going on is answered with what it wants', async () => {
    const { device, client } = await begun('again');
    await stream(client, 'again', 0, 3);
    await client.cut();
    const other = await greeted(device.key);
    other.send({ type: 'begin', trial: null, run: 'again', startUs: START_US });
    expect(await other.next('ack')).toMatchObject({ run: 'again', next: 3 });
  });
});

describe('a trial', () => {
  it('is armed, begun, away, back and stopped as its device goes', async () => {
    const device = await lab.device();
    const trial = await lab.armedTrial(device.id);
    const client = await greeted(device.key);
    expect(await client.next('arm')).toMatchObject({ trial });
    client.send({ type: 'begin', trial, run: 't', startUs: START_US });
    await stream(client, 't', 0, 2);
    expect(lab.link.stateOf(device.id)).toBe('recording');
    expect(lab.link.rigOf(device.id)).toEqual({ code: 'heron-8', revision: 1 });
    expect(lab.link.arm(device.id, trial)).toBe('busy');
    await client.cut();
    await expect.poll(() => lab.told.map(({ what }) => what)).toEqual(['began', 'away']);
    expect(lab.link.stateOf(device.id)).toBe('gone');
    expect(lab.link.stop(trial)).toBe('gone');
    const again = await greeted(device.key);
    await stream(again, 't', 2, 4);
    expect(lab.link.stop(trial)).toBe('sent');
    expect(await again.next('stop')).toMatchObject({ run: 't' });
    await ended(again, 't', 4, 80, 'stopped');
    expect(lab.told.map(({ what }) => what)).toEqual(['began', 'away', 'back', 'stopped']);
    expect(lab.told.at(-1)).toMatchObject({ trial, reason: 'stopped' });
    expect(lab.link.stop(trial)).toBe('not-recording');
  });

  it('reaches the rooms sample by sample, with its marks', async () => {
    const heard: { samples: number; marks: string[] } = { samples: 0, marks: [] };
    const off = [lab.bus.on('samples', ({ chunk }) => { heard.samples += chunk.count; }), lab.bus.on('mark', ({ label }) => heard.marks.push(label))];
    const device = await lab.device();
    const trial = await lab.armedTrial(device.id);
    const client = await greeted(device.key);
    client.send({ type: 'begin', trial, run: 'rooms', startUs: START_US });
    await stream(client, 'rooms', 0, 5);
    client.send({ type: 'mark', run: 'rooms', atUs: START_US + 1000, label: 'now' });
    await ended(client, 'rooms', 5, 100);
    off.forEach((stop) => stop());
    expect(heard).toEqual({ samples: 100, marks: ['now'] });
  });
});

/** WebSocket frames as they go over the wire, masked as a client's are. */
async function framesOf(messages: Parameters<LinkClient['send']>[0][]): Promise<Buffer> {
  // The class that ws itself sends with; its types leave it out.
  const { Sender } = (await import('ws')) as unknown as { Sender: { frame(data: Uint8Array, options: object): Buffer[] } };
  const { encodeDeviceMessage } = await import('@shared/link');
  return Buffer.concat(messages.flatMap((message) =>
    Sender.frame(Buffer.from(encodeDeviceMessage(message)), { fin: true, rsv1: false, opcode: 2, mask: true, readOnly: true })));
}

/** Every way in which the device link says no, through a real socket: the right code, nothing lost, counted on the device. */
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { eq } from 'drizzle-orm';
import { faultCodes, faultKinds, float32Block, pack, type FaultCode } from '@shared/link';
import { devices } from '@server/db/schema';
import { openLinkLab, type LinkLab } from '../support/link-lab';
import { dtBlock, heronChannels, hello, LinkClient, START_US, testBatch, type UpgradeRefusal } from '../support/link-client';

let lab: LinkLab;
beforeAll(async () => { lab = await openLinkLab(); });
afterAll(() => lab.close());

const refusal = (promise: Promise<unknown>): Promise<UpgradeRefusal> => promise.then(() => { throw new Error('was let in'); }, (error: unknown) => error as UpgradeRefusal);

describe('the upgrade', () => {
  it.each([
    ['no key', null],
    ['a key nobody has', 'tbk_nobody'],
    ['a key that is not one', 'a b'],
  ])('with %s is refused with KEY_UNKNOWN, 401', async (_what, key) => {
    const refused = await refusal(LinkClient.open(lab.url, key));
    expect(refused).toMatchObject({ status: 401, contentType: 'application/problem+json' });
    expect(refused.problem).toMatchObject({ code: 'KEY_UNKNOWN', status: 401, wayOut: expect.stringMatching(/\w/) });
  });

  it('with a revoked key is refused with KEY_REVOKED, 403, and counted', async () => {
    const device = await lab.device();
    await lab.db.update(devices).set({ revokedAt: new Date() }).where(eq(devices.id, device.id));
    const refused = await refusal(LinkClient.open(lab.url, device.key));
    expect(refused.problem).toMatchObject({ code: 'KEY_REVOKED', status: 403 });
    await expect.poll(() => lab.faultsOf(device.id)).toMatchObject({ KEY_REVOKED: 1 });
  });

  it('without the subprotocol is refused with LINK_VERSION, 426', async () => {
    const device = await lab.device();
    const refused = await refusal(LinkClient.open(lab.url, device.key, 'tautbook.link.v9'));
    expect(refused.problem).toMatchObject({ code: 'LINK_VERSION', status: 426 });
  });

  it('of a second connection is refused with DEVICE_BUSY, 409, while the first one answers', async () => {
    const device = await lab.device();
    const first = await LinkClient.greeted(lab.url, device.key);
    const refused = await refusal(LinkClient.open(lab.url, device.key));
    expect(refused.problem).toMatchObject({ code: 'DEVICE_BUSY', status: 409 });
    expect(first.closed).toBeNull();
    await first.cut();
  });

  it('of a second connection replaces a first one that is dead', async () => {
    const device = await lab.device();
    const first = await LinkClient.greeted(lab.url, device.key);
    first.socket.pause(); // reads nothing, so answers no ping
    const second = await LinkClient.greeted(lab.url, device.key);
    expect(lab.link.stateOf(device.id)).toBe('connected');
    await second.cut();
    first.socket.terminate();
  });
});

describe('hello', () => {
  it.each<[string, FaultCode, Parameters<typeof hello>[0] & object]>([
    ['of another link version', 'LINK_VERSION', { link: 2 as 1 }],
    ['with a rig nobody imported', 'RIG_UNKNOWN', { rig: { code: 'kestrel-8', revision: 1 } }],
    ['with a revision that is not there', 'RIG_UNKNOWN', { rig: { code: 'heron-8', revision: 9 } }],
    ['with a rig that the device is not registered for', 'RIG_MISMATCH', { rig: { code: 'wren-8', revision: 1 } }],
    ['without the eighth tension', 'CHANNELS', { channels: heronChannels.filter((name) => name !== 't8_N') }],
    ['with a channel named twice', 'CHANNELS', { channels: [...heronChannels, 'grasp'] }],
    ['with more channels than are taken', 'CHANNELS', { channels: [...heronChannels, ...Array.from({ length: 300 }, (_, i) => `x${i}_N`)] }],
    ['at a rate of zero', 'RATE', { rateHz: 0 }],
    ['at a rate of a million', 'RATE', { rateHz: 1e6 }],
    ['at a rate that is no number', 'RATE', { rateHz: Number.NaN }],
  ])('%s gets %s and its close code', async (_what, code, wrong) => {
    const device = await lab.device();
    const client = await LinkClient.open(lab.url, device.key);
    client.send(hello(wrong));
    const fault = await client.next('fault');
    await client.until(() => client.closed, 'close');
    expect(fault).toMatchObject({ code, fatal: true });
    expect(client.closed).toEqual({ code: faultKinds[code].closeCode });
    await expect.poll(() => lab.faultsOf(device.id)).toMatchObject({ [code]: 1 });
  });

  it('comes first: anything else is refused and waits for it', async () => {
    const device = await lab.device();
    const client = await LinkClient.open(lab.url, device.key);
    client.send({ type: 'begin', trial: null, run: 'r', startUs: START_US });
    expect(await client.next('fault')).toMatchObject({ code: 'MALFORMED', fatal: false });
    client.send(hello());
    await client.next('welcome');
    client.send(hello());
    await client.until(() => client.faults().length === 2, 'second fault');
    await client.cut();
  });
});

describe('a running run', () => {
  async function running(run: string) {
    const device = await lab.device();
    const client = await LinkClient.greeted(lab.url, device.key);
    client.send({ type: 'begin', trial: null, run, startUs: START_US });
    await client.next('ack', (ack) => ack.run === run);
    client.send(testBatch(run, 0));
    await client.next('ack', (ack) => ack.run === run && ack.next === 1);
    return { device, client };
  }

  const wrong = (more: Parameters<typeof testBatch>[3]) => testBatch('r', 1, 20, more);
  const infinite = new Float32Array(20 * heronChannels.length);
  infinite[250] = Number.NEGATIVE_INFINITY;

  it.each<[string, FaultCode, Parameters<typeof testBatch>[3] & object, number]>([
    ['a number ahead of its turn', 'BATCH_ORDER', { n: 7 }, 1],
    ['data for another count', 'BATCH_SIZE', { count: 19 }, 1],
    ['data that ends inside a float', 'BATCH_SIZE', { data: wrong({}).data.subarray(1) }, 1],
    ['no samples', 'BATCH_SIZE', { count: 0, data: new Uint8Array(0) }, 1],
    ['times for another count', 'BATCH_SIZE', { dtUs: dtBlock([0, 1]) }, 1],
    ['an infinity', 'NOT_FINITE', { data: float32Block(infinite) }, 1],
    ['times that stand still', 'RATE', { dtUs: dtBlock(Array.from({ length: 20 }, () => 5)) }, 1],
    ['times before those that came', 'RATE', { t0Us: START_US + 3000 }, 1],
    ['times before the start of the run', 'RATE', { t0Us: START_US - 3000 }, 1],
    ['sample indices that came before', 'BATCH_SIZE', { first: 3 }, 1],
    ['a negative count', 'MALFORMED', { count: -1 }, 1],
    ['a count that is no number', 'MALFORMED', { count: 'many' as unknown as number }, 1],
  ])('refuses %s with %s, says which batch, and goes on with the right one', async (_what, code, more, n) => {
    const { device, client } = await running('r');
    client.send(testBatch('r', 1, 20, more));
    expect(await client.next('fault')).toMatchObject({ code, fatal: false, run: 'r', ...(code === 'MALFORMED' ? {} : { n }) });
    client.send(testBatch('r', 1));
    client.send({ type: 'end', run: 'r', batches: 2, samples: 40, reason: 'done' });
    await client.next('ack', (ack) => ack.ended === true);
    const recording = await lab.recording(device.id, 'r');
    expect(recording).toMatchObject({ state: 'closed', samples: 40, endReason: 'done', gaps: [] });
    await client.cut();
    await expect.poll(() => lab.faultsOf(device.id)).toMatchObject({ [code]: 1 });
  });

  it('asks once for the wanted batch when a whole flight is ahead of its turn, and again for the next flight', async () => {
    const { client } = await running('r');
    for (const n of [2, 3, 4, 5]) client.send(testBatch('r', n));
    await client.handled();
    expect(client.faults().filter(({ code }) => code === 'BATCH_ORDER')).toHaveLength(1);
    for (const n of [2, 3]) client.send(testBatch('r', n));
    await client.handled();
    expect(client.faults().filter(({ code }) => code === 'BATCH_ORDER')).toMatchObject([{ n: 1 }, { n: 1 }]);
    await client.cut();
  });

  it('takes NaN as not measured', async () => {
    const { device, client } = await running('nan');
    const values = new Float32Array(20 * heronChannels.length).fill(Number.NaN);
    client.send(testBatch('nan', 1, 20, { data: float32Block(values) }));
    client.send({ type: 'end', run: 'nan', batches: 2, samples: 40, reason: 'done' });
    await client.next('ack', (ack) => ack.ended === true);
    expect((await lab.recording(device.id, 'nan')).statistics?.['grasp']).toMatchObject({ missing: 20 });
    await client.cut();
  });

  it('survives frames that are no messages', async () => {
    const { client } = await running('r');
    const before = client.faults().length;
    const bad = [
      new Uint8Array(0),
      Uint8Array.of(0xc1),
      Uint8Array.of(0x81, 0xa4),
      pack({ type: 'teapot' }),
      // extension types: a timestamp, and what some libraries use for functions and expressions
      Uint8Array.of(0x81, 0xa1, 0x61, 0xd6, 0xff, 0, 0, 0, 0),
      Uint8Array.of(0x81, 0xa1, 0x61, 0xd4, 0x78, 0x01),
      // a list that says it holds four thousand million values
      Uint8Array.of(0x81, 0xa1, 0x61, 0xdd, 0xff, 0xff, 0xff, 0xff),
      // nested a thousand deep
      Uint8Array.from([0x81, 0xa1, 0x61, ...Array.from({ length: 1000 }, () => 0x91), 0xc0]),
      Uint8Array.from([...pack({ type: 'mark', run: 'r', atUs: START_US, label: 'x' }), 0x00]),
    ];
    for (const bytes of bad) client.sendBytes(bytes);
    client.socket.send('text');
    await client.until(() => client.faults().length === before + bad.length + 1, 'a fault each');
    expect(client.faults().slice(before).every(({ code, fatal }) => code === 'MALFORMED' && !fatal)).toBe(true);
    client.send(testBatch('r', 1));
    await client.next('ack', (ack) => ack.next === 2);
    await client.cut();
  });

  it('closes a connection that only talks nonsense, and keeps what is durable', async () => {
    const { device, client } = await running('r');
    for (let i = 0; i < 100; i += 1) client.sendBytes(Uint8Array.of(0xc1));
    await client.until(() => client.closed, 'close');
    expect(client.closed).toEqual({ code: faultKinds.MALFORMED.closeCode });
    expect(await lab.recording(device.id, 'r')).toMatchObject({ state: 'growing', nextBatch: 1, samples: 20 });
  });

  it('answers a frame of 10 MB with FRAME_TOO_LARGE, and the run goes on over the next connection', async () => {
    const { device, client } = await running('big');
    client.send(testBatch('big', 1, 20, { data: new Uint8Array(10_000_000) }));
    expect(await client.next('fault')).toMatchObject({ code: 'FRAME_TOO_LARGE', fatal: true });
    await client.until(() => client.closed, 'close');
    expect(client.closed).toEqual({ code: faultKinds.FRAME_TOO_LARGE.closeCode });
    const again = await LinkClient.open(lab.url, device.key);
    again.send(hello());
    expect((await again.next('welcome')).resume).toEqual([{ run: 'big', next: 1 }]);
    await again.cut();
  });

  it('does not even take in a frame above the ceiling', async () => {
    const { client } = await running('huge');
    client.sendBytes(new Uint8Array(17_000_000));
    await client.until(() => client.closed, 'close');
    expect(client.closed?.code).toBe(1009); // RFC 6455: message too big
  });

  it('says RUN_UNKNOWN for what never began and RUN_CLOSED for what is over', async () => {
    const { client } = await running('over');
    client.send(testBatch('never', 0));
    expect(await client.next('fault')).toMatchObject({ code: 'RUN_UNKNOWN', run: 'never', n: 0 });
    client.send({ type: 'end', run: 'over', batches: 1, samples: 20, reason: 'stopped' });
    await client.next('ack', (ack) => ack.ended === true);
    for (const message of [testBatch('over', 1), { type: 'begin', trial: null, run: 'over', startUs: START_US + 1 } as const, { type: 'mark', run: 'over', atUs: START_US, label: 'late' } as const]) {
      const since = client.heard.length;
      client.send(message);
      expect(await client.next('fault', () => true, since)).toMatchObject({ code: 'RUN_CLOSED', run: 'over', fatal: false });
    }
    await client.cut();
  });

  it('refuses an end that knows of other batches or fewer samples than came', async () => {
    const { client } = await running('e');
    client.send({ type: 'end', run: 'e', batches: 3, samples: 60, reason: 'done' });
    expect(await client.next('fault')).toMatchObject({ code: 'BATCH_ORDER', n: 1 });
    client.send({ type: 'end', run: 'e', batches: 1, samples: 7, reason: 'done' });
    expect(await client.next('fault', ({ code }) => code !== 'BATCH_ORDER')).toMatchObject({ code: 'BATCH_SIZE' });
    client.send({ type: 'end', run: 'e', batches: 1, samples: 20, reason: 'done' });
    await client.next('ack', (ack) => ack.ended === true);
    await client.cut();
  });

  it('refuses trials that are not there or not armed here, and unfiled runs still go', async () => {
    const device = await lab.device();
    const client = await LinkClient.greeted(lab.url, device.key);
    client.send({ type: 'begin', trial: 'no trial', run: 'a', startUs: START_US });
    expect(await client.next('fault')).toMatchObject({ code: 'TRIAL_UNKNOWN', run: 'a', fatal: false });
    client.send({ type: 'begin', trial: await lab.armedTrial((await lab.device()).id), run: 'a', startUs: START_US });
    expect(await client.next('fault', ({ code }) => code === 'TRIAL_NOT_ARMED')).toMatchObject({ run: 'a', fatal: false });
    client.send({ type: 'begin', trial: null, run: 'a', startUs: START_US });
    await client.next('ack', (ack) => ack.run === 'a');
    await client.cut();
  });

  it('lets a device have eight open runs and not a ninth', async () => {
    const device = await lab.device();
    const client = await LinkClient.greeted(lab.url, device.key);
    for (let i = 0; i < 9; i += 1) client.send({ type: 'begin', trial: null, run: `r${i}`, startUs: START_US });
    expect(await client.next('fault')).toMatchObject({ code: 'DEVICE_BUSY', run: 'r8', fatal: false });
    await client.cut();
  });

  it('cuts a revoked device off at once with KEY_REVOKED', async () => {
    const { device, client } = await running('cut');
    lab.link.revoke(device.id);
    await client.until(() => client.closed, 'close');
    expect(client.faults().at(-1)).toMatchObject({ code: 'KEY_REVOKED', fatal: true });
    expect(client.closed).toEqual({ code: faultKinds.KEY_REVOKED.closeCode });
    expect(await lab.recording(device.id, 'cut')).toMatchObject({ state: 'growing', samples: 20 });
  });
});

it('had every refusal that a device can be told counted on some device', async () => {
  const rows = await lab.db.select({ faults: devices.faults }).from(devices);
  const counted = new Set(rows.flatMap(({ faults }) => Object.keys(faults)));
  // A key that nobody has belongs to no device; STORAGE is the server's own trouble (tests/faults).
  expect(faultCodes.filter((code) => !counted.has(code))).toEqual(['KEY_UNKNOWN', 'STORAGE']);
});

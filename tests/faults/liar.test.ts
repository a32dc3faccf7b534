/** A device that lies about counts, times, indices and channels, at random, in the middle of a stream: every lie is refused, what is true is stored. */
import { afterAll, beforeAll, expect, it } from 'vitest';
import { channelNames } from '@shared/recording';
import { type FaultCode, float32Block, type ServerMessage } from '@shared/link';
import { recordings } from '@server/db/schema';
import { eq } from 'drizzle-orm';
import { dtBlock, deviceNowUs, heronChannels, LinkClient, START_US, testBatch } from '../support/link-client';
import { differences } from '../support/link-compare';
import { openLinkLab, type LinkLab } from '../support/link-lab';
import { seededRandom } from './seeded-random';

let lab: LinkLab;
beforeAll(async () => { lab = await openLinkLab(); });
afterAll(() => lab.close());

type Batch = ReturnType<typeof testBatch>;
const random = seededRandom(4);
const upTo = (most: number): number => 1 + Math.floor(random() * most);
const channels = heronChannels.length;
const infinite = (): Uint8Array => {
  const values = new Float32Array(20 * channels);
  values[Math.floor(random() * values.length)] = random() < 0.5 ? Number.POSITIVE_INFINITY : Number.NEGATIVE_INFINITY;
  return float32Block(values);
};

/** What a lie about the next batch looks like, and what is said to it. */
const lies: [FaultCode, (honest: Batch) => Partial<Batch>][] = [
  ['BATCH_SIZE', () => ({ count: 20 + upTo(900) })],
  ['BATCH_SIZE', () => ({ count: upTo(19) })],
  ['BATCH_SIZE', () => ({ count: 2_147_483_647 })],
  ['BATCH_SIZE', ({ data }) => ({ data: data.subarray(0, data.length - upTo(1900)) })],
  ['BATCH_SIZE', () => ({ data: float32Block(new Float32Array(20 * (channels - 1))) })], // a channel less than hello said
  ['BATCH_SIZE', () => ({ data: float32Block(new Float32Array(20 * (channels + 1))) })],
  ['BATCH_SIZE', ({ first }) => ({ first: Math.max(0, first - upTo(20)) })],
  ['BATCH_SIZE', () => ({ first: 2_147_483_647 })],
  ['BATCH_SIZE', () => ({ dtUs: dtBlock(Array.from({ length: upTo(19) }, (_, i) => i * 1000)) })],
  ['RATE', ({ t0Us }) => ({ t0Us: t0Us - 1000 * upTo(20) })],
  ['RATE', () => ({ t0Us: 0 })],
  ['RATE', () => ({ dtUs: dtBlock(Array.from({ length: 20 }, (_, i) => (20 - i) * 1000)) })],
  ['NOT_FINITE', () => ({ data: infinite() })],
  ['BATCH_ORDER', ({ n }) => ({ n: n + upTo(1000) })],
  ['MALFORMED', () => ({ count: -upTo(5) })],
  ['MALFORMED', () => ({ t0Us: Number.NaN })],
  ['MALFORMED', () => ({ first: 0.5 })],
  ['MALFORMED', () => ({ data: 'float32' as unknown as Uint8Array })],
];

it('refuses three hundred lies and stores three hundred batches between them', { timeout: 120_000 }, async () => {
  const { id, key } = await lab.device();
  const client = await LinkClient.greeted(lab.url, key);
  client.send({ type: 'begin', trial: null, run: 'r', startUs: START_US });
  const expected: FaultCode[] = [];
  // The first batch is true: a lie about the past needs one.
  for (let n = 0; n < 301; n += 1) {
    const honest = testBatch('r', n);
    if (n > 0) {
      const [code, lie] = lies[Math.floor(random() * lies.length)] as (typeof lies)[number];
      expected.push(code);
      const heard = client.faults().length;
      client.send({ ...honest, ...lie(honest) });
      await client.until(() => client.faults().length > heard, code);
    }
    client.send(honest);
  }
  client.send({ type: 'end', run: 'r', batches: 301, samples: 6020, reason: 'done' });
  await client.next('ack', ({ ended }) => ended === true);
  expect(client.faults().map(({ code }) => code)).toEqual(expected);
  const recording = await lab.recording(id, 'r');
  expect(recording).toMatchObject({ state: 'closed', samples: 6020, gaps: [] });
  const sent = Array.from({ length: 301 }, (_, n) => {
    const values = new Float32Array(Uint8Array.from(testBatch('r', n).data).buffer);
    return { first: n * 20, count: 20, timesUs: Float64Array.from({ length: 20 }, (_, i) => (n * 20 + i) * 1000), columns: channelNames(8).map((_, c) => values.subarray(c * 20, (c + 1) * 20)) };
  });
  expect(differences(await lab.samples(recording.id), sent)).toEqual([]);
  await client.cut();
  const counts: Record<string, number> = {};
  for (const code of expected) counts[code] = (counts[code] ?? 0) + 1;
  await expect.poll(() => lab.faultsOf(id)).toEqual(counts);
});

it('a rate that is not kept shows as gaps, not as faults', async () => {
  const { id, key } = await lab.device();
  const client = await LinkClient.greeted(lab.url, key);
  client.send({ type: 'begin', trial: null, run: 'slow', startUs: START_US });
  // 1 kHz was said; every sample comes 2 ms after the one before.
  for (let n = 0; n < 3; n += 1) client.send(testBatch('slow', n, 5, { t0Us: START_US + n * 10_000, dtUs: dtBlock([0, 2000, 4000, 6000, 8000]) }));
  client.send({ type: 'end', run: 'slow', batches: 3, samples: 15, reason: 'done' });
  await client.next('ack', ({ ended }) => ended === true);
  expect((await lab.recording(id, 'slow')).gaps).toHaveLength(14);
  expect(client.faults()).toEqual([]);
  await client.cut();
});

it.each([
  ['a clock that stands', () => 5],
  ['a clock of another age', () => Number.MAX_SAFE_INTEGER],
  ['a clock that runs backwards', () => 9e12 - deviceNowUs() * 1000],
  ['a clock that jumps', () => deviceNowUs() + random() * 1e12],
])('%s leaves the recording a start that can be, and the samples as they are', async (_what, lie) => {
  const { id, key } = await lab.device();
  const client = await LinkClient.greeted(lab.url, key);
  client.clock = lie;
  await client.until(() => client.heard.filter(({ type }) => type === 'clock').length > 12, 'clock round trips');
  client.send({ type: 'begin', trial: null, run: 'r', startUs: START_US });
  client.send(testBatch('r', 0));
  client.send({ type: 'end', run: 'r', batches: 1, samples: 20, reason: 'done' });
  await client.until(() => client.heard.some((message: ServerMessage) => message.type === 'ack' && message.ended === true), 'end');
  const [row] = await lab.db.select().from(recordings).where(eq(recordings.deviceId, id));
  expect(row).toMatchObject({ state: 'closed', samples: 20, lastUs: 19_000 });
  expect(row?.startedAt.getTime()).toBeLessThanOrEqual(Date.now());
  await client.cut();
});

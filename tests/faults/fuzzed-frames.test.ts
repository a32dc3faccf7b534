/** A hundred thousand frames of nonsense on a live connection, beside an honest run of the same device: each is refused or means something, and the honest run is stored to the bit. */
import { readFileSync } from 'node:fs';
import { afterAll, beforeAll, expect, it } from 'vitest';
import { decodeDeviceMessage, deviceMessage, encodeDeviceMessage, float32Block } from '@shared/link';
import { type Chunk, channelNames } from '@shared/recording';
import { differences } from '../support/link-compare';
import { LinkClient, START_US, testBatch, valueAt } from '../support/link-client';
import { openLinkLab, type LinkLab } from '../support/link-lab';
import { seededRandom } from './seeded-random';

const FRAMES = 100_000;
/** Nonsense between two honest batches. */
const BETWEEN = 500;

const random = seededRandom(100_000);
const below = (limit: number): number => Math.floor(random() * limit);
const one = <T>(of: readonly T[]): T => of[below(of.length)] as T;
const bytes = (length: number): Uint8Array => Uint8Array.from({ length }, () => below(256));

/** Published frames of devices, and batches of runs that may have begun. No run of theirs is the honest one. */
const published = (JSON.parse(readFileSync(new URL('../../samples/link/examples.json', import.meta.url), 'utf8')) as { frames: { from: string; hex: string }[] }).frames
  .filter(({ from }) => from === 'device').map(({ hex }) => Uint8Array.from(Buffer.from(hex, 'hex')));
const whole = (): Uint8Array => {
  const run = `f${below(12)}`;
  return one<() => Uint8Array>([
    () => one(published),
    () => encodeDeviceMessage({ type: 'begin', trial: random() < 0.3 ? `t${below(9)}` : null, run, startUs: START_US }),
    () => encodeDeviceMessage(testBatch(run, below(4), 1 + below(3))),
    () => encodeDeviceMessage({ ...testBatch(run, below(4), 2), data: float32Block(new Float32Array(below(60)).fill(one([1, Number.NaN, Number.POSITIVE_INFINITY, 1e-45]))) }),
    () => encodeDeviceMessage({ type: 'mark', run, atUs: START_US + below(9e6), label: 'm'.repeat(1 + below(200)) }),
    () => encodeDeviceMessage({ type: 'end', run, batches: below(4), samples: below(100), reason: one(['done', 'stopped', 'fault']) }),
    () => encodeDeviceMessage({ type: 'clock', id: below(2 ** 31), deviceUs: random() * 1e15 }),
  ])();
};

/** Openings of maps, arrays, strings and blocks that promise what does not follow; extension types and the byte that MessagePack never uses. */
const heads = [0x80, 0x8f, 0x9f, 0xbf, 0xc1, 0xc4, 0xc5, 0xc6, 0xc7, 0xc8, 0xc9, 0xca, 0xcb, 0xcf, 0xd3, 0xd4, 0xd8, 0xd9, 0xda, 0xdb, 0xdc, 0xdd, 0xde, 0xdf, 0xff];

const spoil: ((frame: Uint8Array) => Uint8Array)[] = [
  (frame) => frame,
  (frame) => frame.slice(0, below(frame.length)),
  (frame) => Uint8Array.from(frame, (byte) => (random() < 2 / frame.length ? byte ^ (1 << below(8)) : byte)),
  (frame) => Uint8Array.from(frame, (byte, i) => (i < 40 && random() < 0.05 ? below(256) : byte)),
  (frame) => Uint8Array.from([...frame.slice(0, below(frame.length)), ...whole().slice(below(20))]),
  (frame) => Uint8Array.from([...frame, ...bytes(1 + below(8))]),
  (frame) => {
    const at = below(Math.min(frame.length, 60));
    return Uint8Array.from([...frame.slice(0, at), one(heads), ...frame.slice(at)]);
  },
  () => bytes(below(64)),
  () => Uint8Array.from([one(heads), 0xff, 0xff, 0xff, 0xff, ...bytes(below(20))]),
  () => new Uint8Array(1 + below(3000)).fill(one([0x81, 0x91, 0xdc])), // maps in maps, arrays in arrays
  () => Uint8Array.from([0x82, 0xa9, ...Buffer.from('__proto__'), 0x80, ...whole().slice(1)]),
];

let lab: LinkLab;
beforeAll(async () => { lab = await openLinkLab({ faultsInARow: Number.MAX_SAFE_INTEGER }); });
afterAll(() => lab.close());

it(`${FRAMES} frames leave the device's honest run as it is`, { timeout: 240_000 }, async () => {
  const { id, key } = await lab.device();
  const begin = { type: 'begin', trial: null, run: 'honest', startUs: START_US } as const;
  let client = await LinkClient.greeted(lab.url, key);
  client.send(begin);
  let refused = 0;
  let answered = 0;
  let closed = 0;
  const rounds = FRAMES / BETWEEN;
  for (let n = 0; n < rounds; n += 1) {
    let wrong = 0;
    for (let i = 0; i < BETWEEN; i += 1) {
      const frame = one(spoil)(whole());
      const decoded = decodeDeviceMessage(frame);
      // What is taken has the meaning that the schema gives, also where it is read the quick way.
      if (decoded.ok) expect(deviceMessage.safeParse(decoded.message).success).toBe(true);
      else {
        expect(decoded.problem).toMatch(/^\S.*\.$/s);
        wrong += 1;
      }
      client.sendBytes(frame);
    }
    // Sent until it is durable: nonsense may say a version or a time for which the connection is closed.
    for (;;) {
      client.send(testBatch('honest', n));
      await client.until(() => client.closed !== null || client.acked('honest') > n, `batch ${n}`);
      if (client.acked('honest') > n) break;
      closed += 1;
      client = await LinkClient.greeted(lab.url, key);
      wrong = 0; // what lay behind the reason was not looked at
      client.send(begin);
    }
    const faults = client.faults().filter(({ code }) => code === 'MALFORMED' || code === 'LINK_VERSION').length;
    expect(faults).toBeGreaterThanOrEqual(wrong); // each was answered: unreadable frames with a fault of their own
    answered += client.faults().length;
    refused += wrong;
    client.heard.length = 0;
  }
  client.send({ type: 'end', run: 'honest', batches: rounds, samples: rounds * 20, reason: 'done' });
  await client.next('ack', ({ run, ended }) => run === 'honest' && ended === true);
  await client.cut();

  const recording = await lab.recording(id, 'honest');
  expect(recording).toMatchObject({ state: 'closed', endReason: 'done', samples: rounds * 20, gaps: [], marks: [] });
  const sent: Chunk = {
    first: 0, count: rounds * 20, timesUs: Float64Array.from({ length: rounds * 20 }, (_, i) => i * 1000),
    columns: channelNames(8).map((_, c) => Float32Array.from({ length: rounds * 20 }, (__, i) => valueAt(i, c))),
  };
  expect(differences(await lab.samples(recording.id), [sent])).toEqual([]);
  // The frames were nonsense of both kinds: unreadable, and readable but wrong.
  expect(refused).toBeGreaterThan(FRAMES / 3);
  expect(answered).toBeGreaterThan(refused);
  expect(closed).toBeLessThan(rounds / 4);
  // Counted where people look, over all the connections that this took.
  await expect.poll(async () => Object.values(await lab.faultsOf(id)).reduce((sum, count) => sum + count, 0)).toBeGreaterThanOrEqual(answered);
});

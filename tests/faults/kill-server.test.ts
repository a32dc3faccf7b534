/** The server is killed in the middle of eight streams, again and again. What it acknowledged is in the book, once and in order. */
import { afterAll, beforeAll, expect, it } from 'vitest';
import { and, eq } from 'drizzle-orm';
import type { Trial } from '@shared/api/sessions';
import { type Chunk, channelNames } from '@shared/recording';
import { parseRig } from '@shared/rig';
import { recordings } from '@server/db/schema';
import { readChunks } from '@server/ingest';
import { createSimulatedDevice, simulateRun, type SimulatedDevice } from '@server/simulator';
import { heronFile } from '../support/app';
import { differences } from '../support/link-compare';
import { LinkHouse } from '../support/link-house';
import { seededRandom } from './seeded-random';

const DEVICES = 8;
/** More for a longer look: the moments are drawn anew for each. */
const KILLS = Number(process.env['TAUTBOOK_KILLS'] ?? 10);
const rig = parseRig(heronFile);

let house: LinkHouse;
beforeAll(async () => { house = await LinkHouse.open(DEVICES); });
afterAll(() => house.close());

const acknowledged = (devices: readonly SimulatedDevice[]): number => devices.flatMap((device) => device.report().runs).reduce((sum, run) => sum + run.acknowledgedBatches, 0);

it(`loses nothing that it acknowledged in ${KILLS} kills under ${DEVICES} devices`, { timeout: 60_000 + KILLS * 60_000 }, async () => {
  const random = seededRandom(2026);
  let wake: () => void = () => undefined;
  const devices = house.lab.devices.map(({ key }, i) => createSimulatedDevice({
    url: house.url, key, rig: { code: 'heron-8', revision: 1 }, channels: channelNames(8), humanDelayMs: [1, 2], reconnectMs: [50, 200], keepSamples: true, seed: i + 1,
    upsets: { lose: 0.01, repeat: 0.01 },
    source: () => simulateRun({ rig, task: 'pick-and-place', seed: 100 + i, durationS: 3600, chunkSamples: 20 }),
    onEvent: () => wake(),
  }));
  const until = async (holds: () => boolean): Promise<void> => {
    while (!holds()) {
      await new Promise<void>((resolve) => {
        wake = resolve;
        setTimeout(resolve, 5);
      });
    }
  };
  try {
    await Promise.all(devices.map((device) => device.connect()));
    // The first one records an armed trial, the others runs that are filed later.
    const operator = await house.operator();
    const { status } = await operator.post(`/api/trials/${house.lab.trialIds[0]}/arm`, { deviceId: house.lab.devices[0]?.id });
    expect(status).toBe(200);
    for (const device of devices.slice(1)) device.startUnfiled();

    for (let kill = 0; kill < KILLS; kill += 1) {
      // Between half a batch and two seconds of all devices further on: in the tail, in a chunk, in a commit.
      const enough = acknowledged(devices) + 1 + Math.floor(random() * DEVICES * 100);
      await until(() => acknowledged(devices) >= enough);
      await house.end('SIGKILL');
      await house.start();
      await until(() => devices.every(({ state }) => state === 'connected'));
    }
    for (const device of devices) device.stop('done');
    await Promise.all(devices.map((device) => device.settled()));
    expect(devices.map((device) => device.report().connections)).toEqual(devices.map(() => KILLS + 1));
    const trial = (await (await house.operator()).get<Trial>(`/api/trials/${house.lab.trialIds[0]}`)).body;
    expect(trial).toMatchObject({ state: 'stopped', recording: { state: 'closed', endReason: 'done', gaps: [] } });
  } finally {
    await Promise.all(devices.map((device) => device.close(0)));
  }
  await house.end('SIGTERM');

  const { db, close } = await house.data();
  try {
    for (const [i, device] of devices.entries()) {
      const { runs } = device.report();
      expect(runs).toHaveLength(1);
      const [run] = runs;
      expect(run).toMatchObject({ state: 'closed', acknowledgedSamples: run?.samples });
      const [row] = await db.select().from(recordings).where(and(eq(recordings.deviceId, house.lab.devices[i]?.id ?? ''), eq(recordings.run, run?.run ?? '')));
      expect(row).toMatchObject({ state: 'closed', samples: run?.samples, gaps: [] });
      const stored: Chunk[] = [];
      for await (const chunk of readChunks(db, row?.id ?? '')) stored.push(chunk);
      expect(differences(stored, device.samplesOf(run?.run ?? ''))).toEqual([]);
    }
  } finally {
    await close();
  }
});

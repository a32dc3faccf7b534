/** The devices' process is killed in the middle of its streams, again and again. What it was told is durable is in the book, and the run is closed as lost. */
import { afterAll, beforeAll, expect, it } from 'vitest';
import { eq } from 'drizzle-orm';
import type { DeviceId } from '@shared/api/common';
import type { Chunk } from '@shared/recording';
import { parseRig } from '@shared/rig';
import { recordings } from '@server/db/schema';
import { simulateRun } from '@server/simulator';
import { heronFile } from '../support/app';
import { differences } from '../support/link-compare';
import { LinkDevices } from '../support/link-devices';
import { openLinkLab, type LinkLab } from '../support/link-lab';
import { seededRandom } from './seeded-random';

const DEVICES = 4;
const KILLS = 5;

let lab: LinkLab;
beforeAll(async () => { lab = await openLinkLab({ lostAfterMs: 1500 }); });
afterAll(() => lab.close());

/** The first samples of a run, made again from its seed. */
function* made(seed: number, samples: number): Generator<Chunk> {
  let left = samples;
  for (const chunk of simulateRun({ rig: parseRig(heronFile), task: 'reach', seed, durationS: 3600, chunkSamples: 20 })) {
    if (left <= 0) return;
    yield chunk;
    left -= chunk.count;
  }
}

it(`keeps what it acknowledged to ${DEVICES} devices that were killed ${KILLS} times`, { timeout: 240_000 }, async () => {
  const random = seededRandom(7);
  const devices: { id: DeviceId; key: string }[] = [];
  for (let i = 0; i < DEVICES; i += 1) devices.push(await lab.device());
  const told: { device: DeviceId; run: string; seed: number; samples: number }[] = [];
  for (let kill = 0; kill < KILLS; kill += 1) {
    const process = new LinkDevices(lab.url, devices.map(({ key }) => key), 1000 * (kill + 1));
    const enough = 20 + Math.floor(random() * 4000);
    await process.until((each) => each.size === DEVICES && [...each.values()].every(({ samples }) => samples >= enough));
    await process.kill();
    for (const each of process.told.values()) told.push({ ...each, device: (devices[each.device] as { id: DeviceId }).id });
  }
  expect(told).toHaveLength(DEVICES * KILLS);

  await expect.poll(async () => (await lab.db.select({ id: recordings.id }).from(recordings).where(eq(recordings.state, 'growing'))).length, { timeout: 20_000 }).toBe(0);
  for (const { device, run, seed, samples } of told) {
    const recording = await lab.recording(device, run);
    expect(recording).toMatchObject({ state: 'closed', endReason: 'lost', gaps: [] });
    expect(recording.samples).toBeGreaterThanOrEqual(samples);
    expect(recording.samples % 20).toBe(0); // whole batches
    expect(differences(await lab.samples(recording.id), made(seed, recording.samples))).toEqual([]);
  }
});

/**
 * Simulated devices in a process of their own, for tests that kill it: LINK_URL, LINK_KEYS (by comma), LINK_SEED.
 *
 * Each begins one unfiled run, whose samples come from its seed alone, and the process prints what was acknowledged: one line of
 * JSON whenever that has grown.
 */
import { readFileSync } from 'node:fs';
import { fileURLToPath } from 'node:url';
import { parseRig } from '@shared/rig';
import { channelNames } from '@shared/recording';
import { createSimulatedDevice, simulateRun } from '@server/simulator';
import type { Acknowledged } from './link-devices';

const env = (name: string): string => process.env[name] ?? '';
const rig = parseRig(JSON.parse(readFileSync(fileURLToPath(new URL('../../samples/rigs/heron-8.json', import.meta.url)), 'utf8')));
const seed = Number(env('LINK_SEED'));

for (const [i, key] of env('LINK_KEYS').split(',').entries()) {
  const device = createSimulatedDevice({
    url: env('LINK_URL'), key, rig: { code: 'heron-8', revision: 1 }, channels: channelNames(8), seed: seed + i, speed: 2,
    source: () => simulateRun({ rig, task: 'reach', seed: seed + i, durationS: 3600, chunkSamples: 20 }),
  });
  await device.connect();
  const run = device.startUnfiled();
  let told = -1;
  setInterval(() => {
    const [report] = device.report().runs;
    if (report === undefined || report.acknowledgedSamples === told) return;
    told = report.acknowledgedSamples;
    process.stdout.write(`${JSON.stringify({ device: i, run, seed: seed + i, samples: told } satisfies Acknowledged)}\n`);
  }, 5);
}

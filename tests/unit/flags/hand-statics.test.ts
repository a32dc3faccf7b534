/** Wrench and feasibility along a recording, against the rig's own functions for one pose (held to the reference values elsewhere). */
import { readFileSync } from 'node:fs';
import { expect, test } from 'vitest';
import { handStatics } from '@shared/flags';
import { channelNames, parseChannels, type Chunk } from '@shared/recording';
import { distributeTensions, parseRig, wrenchFromTensions, type RigModel } from '@shared/rig';
import { seededRandom } from '@server/simulator/random';

const heron = JSON.parse(readFileSync(new URL('../../../samples/rigs/heron-8.json', import.meta.url), 'utf8')) as { cables: { exit: number[]; attach: number[]; body: string }[] };
const eight = parseRig(heron);
/** Two further cables from exits inside the frame. */
const ten = parseRig({ ...heron, cables: [...heron.cables, ...heron.cables.slice(0, 2).map((cable) => ({ ...cable, exit: cable.exit.map((part) => part * 0.8) }))] });

/** Poses near home; tensions within the limits in half of the samples, anywhere in the other half. */
function chunkOf(rig: RigModel, count: number): Chunk {
  const random = seededRandom(71);
  const n = rig.cableCount;
  const columns = channelNames(n).map(() => new Float32Array(count));
  for (let k = 0; k < count; k += 1) {
    for (let axis = 0; axis < 3; axis += 1) (columns[axis] as Float32Array)[k] = (rig.home.p[axis] as number) + random.between(-0.04, 0.04);
    const q = [random.between(-0.2, 0.2), random.between(-0.2, 0.2), random.between(-0.2, 0.2), 1];
    q.forEach((part, i) => { (columns[3 + i] as Float32Array)[k] = part; });
    (columns[7] as Float32Array)[k] = random.between(rig.graspRange.min, rig.graspRange.max);
    const [low, high] = k % 2 === 0 ? [rig.tensionMin, rig.tensionMax] : [-2, rig.tensionMax * 1.2];
    for (let i = 0; i < n; i += 1) (columns[8 + i] as Float32Array)[k] = random.between(low, high);
  }
  return { first: 0, count, timesUs: Float64Array.from({ length: count }, (_, k) => k * 1000), columns };
}

test.each([['eight cables', eight, 400], ['ten cables', ten, 60]] as const)('%s: the wrench balances the tensions, and it is feasible where a distribution within the limits exists', (_words, rig, count) => {
  const parsed = parseChannels(channelNames(rig.cableCount), rig.cableCount);
  if (!parsed.ok) throw new Error(parsed.error.message);
  const chunk = chunkOf(rig, count);
  const { wrench, feasible } = handStatics(rig, parsed.map)(chunk);
  const read = (c: number, k: number) => (chunk.columns[c] as Float32Array)[k] as number;
  const seen = { yes: 0, no: 0 };
  for (let k = 0; k < count; k += 1) {
    const pose = { p: [read(0, k), read(1, k), read(2, k)] as [number, number, number], q: [read(3, k), read(4, k), read(5, k), read(6, k)] as [number, number, number, number], grasp: read(7, k) };
    const tensions = Array.from({ length: rig.cableCount }, (_, i) => read(8 + i, k));
    const expected = wrenchFromTensions(rig, pose, tensions, new Float64Array(7));
    for (let row = 0; row < 7; row += 1) expect(Math.abs(((wrench[row] as Float64Array)[k] as number) - (expected[row] as number))).toBeLessThan(1e-9);
    const possible = distributeTensions(rig, pose, expected).feasible;
    expect({ k, feasible: feasible[k] }).toEqual({ k, feasible: possible ? 1 : 0 });
    seen[possible ? 'yes' : 'no'] += 1;
  }
  expect(Math.min(seen.yes, seen.no)).toBeGreaterThan(count / 20);
});

test('what was not measured, or has no rotation, is not a number', () => {
  const parsed = parseChannels(channelNames(8), 8);
  if (!parsed.ok) throw new Error(parsed.error.message);
  const chunk = chunkOf(eight, 3);
  (chunk.columns[9] as Float32Array)[0] = Number.NaN;
  for (let i = 3; i < 7; i += 1) (chunk.columns[i] as Float32Array)[1] = 0;
  const { wrench, feasible } = handStatics(eight, parsed.map)(chunk);
  expect([...feasible]).toEqual([Number.NaN, Number.NaN, 1]);
  expect([0, 1, 2].map((k) => Number.isFinite((wrench[0] as Float64Array)[k]))).toEqual([false, false, true]);
});

/** The simulated rig in virtual time. Seeds are written in each test; expected numbers name their origin. */
import { describe, expect, test } from 'vitest';
import { readFileSync } from 'node:fs';
import { cableLengths, rigModel, structureMatrix, type Pose, type RigFile } from '@shared/rig';
import { createFlagger, defaultRules, type Flag } from '@shared/flags';
import { decodeChunk, encodeChunk, parseChannels, type Chunk } from '@shared/recording';
import { parseTrouble, simulateRun, taskCodes, type RunOptions, type SimulatedRun } from '@server/simulator';

const rigOf = (code: string) => rigModel(JSON.parse(readFileSync(new URL(`../../samples/rigs/${code}.json`, import.meta.url), 'utf8')) as RigFile);
const heron = rigOf('heron-8');
const wren = rigOf('wren-8');

const still: Partial<RunOptions> = { exact: true, tremorM: 0, motorLagS: 0 };
const column = (chunk: Chunk, i: number): Float32Array => chunk.columns[i] as Float32Array;
const poseAt = (chunk: Chunk, i: number): Pose => {
  const at = (k: number) => column(chunk, k)[i] as number;
  return { p: [at(0), at(1), at(2)], q: [at(3), at(4), at(5), at(6)], grasp: at(7) };
};
const flagsOf = (run: SimulatedRun, rig = heron): Flag[] => {
  const channels = parseChannels(run.channels, rig.cableCount);
  if (!channels.ok) throw new Error(channels.error.message);
  const flagger = createFlagger(rig, channels.map, run.rateHz, defaultRules(rig));
  const flags = [...run].flatMap((chunk) => flagger.step(chunk));
  return [...flags, ...flagger.finish()];
};

describe('statics', () => {
  test.each(taskCodes.flatMap((task) => [['heron-8', task], ['wren-8', task]] as const))('%s, %s: tensions without noise balance the wrench at every sample', (code, task) => {
    const rig = code === 'heron-8' ? heron : wren;
    const A = new Float64Array(7 * rig.cableCount);
    let worst = 0;
    let samples = 0;
    for (const chunk of simulateRun({ rig, task, seed: 11, durationS: 8, wrench: true, ...still, tremorM: 6e-5 })) {
      for (let i = 0; i < chunk.count; i += 7) {
        structureMatrix(rig, poseAt(chunk, i), A);
        for (let row = 0; row < 7; row += 1) {
          let sum = column(chunk, 24 + row)[i] as number;
          for (let cable = 0; cable < 8; cable += 1) sum += (A[row * 8 + cable] as number) * (column(chunk, 8 + cable)[i] as number);
          worst = Math.max(worst, Math.abs(sum));
          samples += 1;
        }
      }
    }
    expect(samples).toBeGreaterThan(7000);
    // float32 keeps 25 N to 1e-6 N; eight of them and the pose's own rounding stay below 2e-5 N.
    expect(worst).toBeLessThan(2e-5);
  });

  test('tensions stay within the limits and lengths are the pose’s own', () => {
    const lengths = new Float64Array(8);
    for (const chunk of simulateRun({ rig: wren, task: 'pick-and-place', seed: 5, durationS: 20, ...still })) {
      for (let cable = 8; cable < 16; cable += 1) {
        expect(Math.min(...column(chunk, cable))).toBeGreaterThanOrEqual(wren.tensionMin);
        expect(Math.max(...column(chunk, cable))).toBeLessThan(wren.tensionMax - 0.25);
      }
      cableLengths(wren, poseAt(chunk, 0), lengths);
      for (let cable = 0; cable < 8; cable += 1) expect(Math.abs((column(chunk, 16 + cable)[0] as number) - (lengths[cable] as number))).toBeLessThan(1e-6);
    }
  });

  test('stretched cables read shorter by length x tension / (stiffness + tension)', () => {
    const first = (stretch: boolean) => [...simulateRun({ rig: heron, task: 'reach', seed: 3, durationS: 0.01, stretch, ...still })][0] as Chunk;
    const [plain, loaded] = [first(false), first(true)];
    for (let cable = 0; cable < 8; cable += 1) {
      const [l, t] = [column(plain, 16 + cable)[0] as number, column(plain, 8 + cable)[0] as number];
      // Hooke by hand: axial stiffness 25000 N.
      expect((column(loaded, 16 + cable)[0] as number) - l).toBeCloseTo((-l * t) / (25_000 + t), 6);
    }
  });
});

describe('movement', () => {
  test('a straight move peaks at 1.875 times its mean speed (Flash and Hogan 1985)', () => {
    const run = simulateRun({ rig: heron, task: 'reach', seed: 21, durationS: 20, ...still });
    const chunks = [...run];
    const t = chunks.flatMap((chunk) => [...chunk.timesUs].map((us) => us / 1e6));
    const p = [0, 1, 2].map((axis) => chunks.flatMap((chunk) => [...column(chunk, axis)]));
    const long = run.moves.filter(({ from, to, endS }) => endS < 20 && Math.hypot(...[0, 1, 2].map((i) => (to.p[i] as number) - (from.p[i] as number))) > 0.04);
    expect(long.length).toBeGreaterThan(5);
    for (const { startS, endS, from, to } of long) {
      const way = Math.hypot(...[0, 1, 2].map((i) => (to.p[i] as number) - (from.p[i] as number)));
      let peak = 0;
      for (let i = 5; i < t.length - 5; i += 1) {
        if ((t[i] as number) < startS || (t[i] as number) > endS) continue;
        peak = Math.max(peak, Math.hypot(...p.map((axis) => (axis[i + 5] as number) - (axis[i - 5] as number))) / 0.01);
      }
      expect(peak / (way / (endS - startS))).toBeCloseTo(1.875, 2);
    }
  });

  test('every task moves, and pick-and-place squeezes its block', () => {
    for (const task of taskCodes) {
      const run = simulateRun({ rig: heron, task, seed: 8, durationS: 25, ...still, wrench: true });
      const grips = [...run].map((chunk) => Math.min(...column(chunk, 30)));
      expect(run.marks.length).toBeGreaterThan(2);
      expect(Math.min(...grips) < -4).toBe(task === 'pick-and-place');
    }
  });
});

describe('chance', () => {
  const options: RunOptions = { rig: heron, task: 'press', seed: 77, durationS: 4, troubles: [{ kind: 'slack' }, { kind: 'gap' }] };

  test('one seed is one run, read twice or made twice; another seed is another run', () => {
    const run = simulateRun(options);
    const bytes = (from: Iterable<Chunk>) => [...from].map((chunk) => [...encodeChunk(chunk)]);
    const once = bytes(run);
    expect(bytes(run)).toEqual(once);
    expect(bytes(simulateRun(options))).toEqual(once);
    expect(bytes(simulateRun({ ...options, seed: 78 }))).not.toEqual(once);
  });

  test('readings lie on the sensors’ grid, so that a second at 1 kHz stores in under a third of its raw size', () => {
    const chunks = [...simulateRun({ rig: heron, task: 'pick-and-place', seed: 9, durationS: 6 })];
    for (const chunk of chunks) {
      const stored = encodeChunk(chunk);
      expect(decodeChunk(stored).columns).toEqual(chunk.columns);
      expect(stored.length).toBeLessThan((chunk.count * 24 * 4) / 3);
      for (const value of column(chunk, 9)) expect(Math.fround(Math.round(value * 1e4) / 1e4)).toBe(value);
    }
  });
});

describe('scripted trouble', () => {
  const run = simulateRun({
    rig: heron, task: 'pick-and-place', seed: 41, durationS: 40,
    troubles: [{ kind: 'slack', cable: 3 }, { kind: 'saturation', cable: 6 }, { kind: 'gap' }, { kind: 'oscillation' }, { kind: 'slip', cable: 2 }, { kind: 'near-limit' }, { kind: 'pretension' }],
  });
  const flags = flagsOf(run);

  test('the flagger finds every trouble where the truth says, and nothing else', () => {
    expect(new Set(run.truth.map(({ kind }) => kind))).toEqual(new Set(['slack', 'saturation', 'gap', 'oscillation', 'slip']));
    for (const truth of run.truth) {
      // Noise of 0.02 N moves a crossing by as much time as the tension takes for it: a loosened rig falls slowly.
      const near = { slack: 0.012, saturation: 0.01, gap: 1e-6, oscillation: 0.12, slip: 0.02 }[truth.kind];
      const found = flags.filter(({ kind, cable, startS, endS }) => kind === truth.kind && (cable ?? null) === truth.cable
        && Math.abs(startS - truth.startS) <= near && (truth.endS === null || Math.abs(endS - truth.endS) <= near));
      expect(found, `${truth.kind} of cable ${truth.cable} at ${truth.startS}`).toHaveLength(1);
    }
    expect(flags).toHaveLength(run.truth.length);
  });

  test('a saturation is real: the limits do not allow the push, and its cable stands at the limit', () => {
    const saturated = run.truth.find(({ kind, cable }) => kind === 'saturation' && cable === 6);
    expect(saturated?.peak).toBeCloseTo(heron.tensionMax, 3);
  });

  test('near the limit is no saturation and no slack', () => {
    const calm = simulateRun({ rig: heron, task: 'reach', seed: 4, durationS: 12, troubles: [{ kind: 'near-limit' }, { kind: 'near-limit' }] });
    const highest = Math.max(...[...calm].map((chunk) => Math.max(...chunk.columns.slice(8, 16).map((tension) => Math.max(...tension)))));
    expect(calm.truth).toEqual([]);
    expect(flagsOf(calm)).toEqual([]);
    expect(highest).toBeGreaterThan(0.88 * heron.tensionMax);
  });

  test('a run without trouble has no flags, whatever the task and the rig', () => {
    for (const rig of [heron, wren]) for (const task of taskCodes) expect(flagsOf(simulateRun({ rig, task, seed: 13, durationS: 15 }), rig), `${rig.file.code} ${task}`).toEqual([]);
  });

  test('a cable that comes off is slack, and its length departs, until the end', () => {
    const off = simulateRun({ rig: heron, task: 'reach', seed: 6, durationS: 12, troubles: [{ kind: 'cable-off', cable: 5, atS: 7 }] });
    const found = flagsOf(off).filter(({ cable }) => cable === 5);
    expect(found.map(({ kind }) => kind).sort()).toEqual(['slack', 'slip']);
    for (const { endS } of found) expect(endS).toBeCloseTo(11.999, 2);
  });

  test('a gap leaves no index out and jumps in time', () => {
    const chunks = [...simulateRun({ rig: heron, task: 'reach', seed: 2, durationS: 3, troubles: [{ kind: 'gap', atS: 1.2, durationS: 0.3 }] })];
    let wanted = 0;
    for (const chunk of chunks) {
      expect(chunk.first).toBe(wanted);
      wanted += chunk.count;
    }
    expect(wanted).toBe(2700);
    const times = chunks.flatMap((chunk) => [...chunk.timesUs]);
    expect(times.filter((us, i) => i > 0 && us - (times[i - 1] as number) > 1500)).toEqual([1_500_000]);
  });
});

describe('what cannot be run is refused with a sentence', () => {
  const base: RunOptions = { rig: heron, task: 'reach', seed: 1, durationS: 5 };
  test.each([
    ['an unknown task', { task: 'juggle' }],
    ['no duration', { durationS: 0 }],
    ['a rate beyond the link’s', { rateHz: 50_000 }],
    ['a cable that the rig does not have', { troubles: [{ kind: 'slip', cable: 9 }] }],
    ['a trouble after the end', { troubles: [{ kind: 'slack', atS: 5 }] }],
  ] as const)('%s', (_, wrong) => {
    expect(() => simulateRun({ ...base, ...wrong })).toThrow(RangeError);
  });

  test('troubles are read as they are written', () => {
    expect(parseTrouble('slack')).toEqual({ kind: 'slack' });
    expect(parseTrouble('slip@20:cable=3')).toEqual({ kind: 'slip', atS: 20, cable: 3 });
    expect(parseTrouble('gap@1.5:duration=0.25')).toEqual({ kind: 'gap', atS: 1.5, durationS: 0.25 });
    for (const wrong of ['flood', 'slack@', 'slack@1:colour=3', 'slack@1.2.3', '']) expect(typeof parseTrouble(wrong)).toBe('string');
  });
});

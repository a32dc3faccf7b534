/** The one-pass measures of a whole recording: chunking, gaps, missing values, known movements. Seeds are written down. */
import { readFileSync } from 'node:fs';
import { gunzipSync } from 'node:zlib';
import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { createMeasures, type MeasureChunk, type MeasureOptions, type RecordingMeasures } from '@shared/motion/measures';
import { seededRandom } from '@shared/stats/seeded-random';

const SEED = 20261;
const options: MeasureOptions = { rateHz: 1000, cableCount: 2, tensionMin: 1, tensionMax: 25, slackBelow: 0.5, grasp: { min: 0, max: 0.05 } };

interface Columns {
  t: number[];
  x: number[];
  y: number[];
  z: number[];
  grasp: number[];
  tensions: number[][];
  q?: number[][];
  wrench?: number[][];
}

function cut(columns: Columns, from: number, to: number): MeasureChunk {
  const part = (column: number[]): Float64Array => Float64Array.from(column.slice(from, to));
  return {
    count: to - from,
    t: part(columns.t),
    x: part(columns.x),
    y: part(columns.y),
    z: part(columns.z),
    grasp: part(columns.grasp),
    tensions: columns.tensions.map(part),
    ...(columns.q === undefined ? {} : { q: columns.q.map(part) as unknown as MeasureChunk['q'] }),
    ...(columns.wrench === undefined ? {} : { wrench: columns.wrench.map(part) }),
  };
}

function measure(columns: Columns, chunk = Infinity, settings = options): RecordingMeasures {
  const measures = createMeasures(settings);
  for (let from = 0; from < columns.t.length; from += chunk) measures.push(cut(columns, from, Math.min(columns.t.length, from + chunk)));
  return measures.finish();
}

/** A hand that goes to and fro along x with rests, closes on something in between, and trembles; tensions that wander. */
function session(seconds: number, seed: number): Columns {
  const random = seededRandom(seed);
  const n = seconds * 1000;
  const columns: Columns = { t: [], x: [], y: [], z: [], grasp: [], tensions: [[], []] };
  for (let i = 0; i < n; i++) {
    const t = i / 1000;
    const phase = t % 4;
    const s = Math.min(1, Math.max(0, phase < 2 ? phase - 0.5 : 3.5 - phase));
    columns.t.push(t);
    columns.x.push(0.2 * (10 * s ** 3 - 15 * s ** 4 + 6 * s ** 5) + 1e-5 * random.normal());
    columns.y.push(0.001 * Math.sin(2 * Math.PI * 10 * t) + 1e-5 * random.normal());
    columns.z.push(1e-5 * random.normal());
    columns.grasp.push(phase < 2 ? 0.04 : 0.015);
    columns.tensions[0]?.push(12 + 6 * Math.sin(t) + 0.03 * random.normal());
    columns.tensions[1]?.push(phase < 0.25 ? 0.2 : phase < 0.75 ? 25 : 8);
  }
  return columns;
}

describe('a recording in chunks', () => {
  const columns = session(12, SEED);
  // Missing positions and grasps, a missing tension, and a gap.
  for (let i = 5000; i < 5030; i++) columns.y[i] = Number.NaN;
  columns.grasp[7000] = Number.NaN;
  (columns.tensions[0] as number[])[3000] = Number.NaN;
  for (let i = 9000; i < columns.t.length; i++) columns.t[i] = (columns.t[i] as number) + 0.4;
  columns.q = [columns.t.map((t) => Math.sin(t / 10)), columns.t.map(() => 0), columns.t.map(() => 0), columns.t.map((t) => Math.cos(t / 10))];
  columns.wrench = Array.from({ length: 7 }, (_, k) => columns.t.map((t) => Math.sin(k + t)));
  const whole = measure(columns);

  it.each([1, 7, 1000, 4999])('has the same measures in chunks of %i', (size) => {
    expect(measure(columns, size)).toEqual(whole);
  });

  it('has the same measures in chunks of any sizes', () => {
    fc.assert(
      fc.property(fc.array(fc.integer({ min: 0, max: 3000 }), { maxLength: 12 }), (sizes) => {
        const measures = createMeasures(options);
        let from = 0;
        for (const size of [...sizes, Infinity]) {
          const to = Math.min(columns.t.length, from + size);
          measures.push(cut(columns, from, to));
          from = to;
        }
        expect(measures.finish()).toEqual(whole);
      }),
      { seed: SEED, numRuns: 15 },
    );
  });
});

describe('what is measured', () => {
  const columns = session(40, SEED);
  const whole = measure(columns);

  it('movements, smoothness, pauses: twenty reaches of 0.2 m', () => {
    expect(whole).toMatchObject({ movements: 20, movementUnits: 20 });
    expect(whole.pathLengthM).toBeGreaterThan(4);
    expect(whole.peakSpeedMps).toBeGreaterThan(0.37);
    expect(whole.peakSpeedMps).toBeLessThan(0.4);
    expect(whole.pauses).toBeGreaterThanOrEqual(20);
    expect(whole.durationS).toBeCloseTo(39.999, 9);
  });

  it('a tremor of 1 mm amplitude at 10 Hz is 0.707 mm RMS, at 1 kHz as at 200 Hz', () => {
    expect(whole.tremorRmsM).toBeCloseTo(0.001 * Math.SQRT1_2, 5);
    const every = (column: number[]): number[] => column.filter((_, i) => i % 5 === 0);
    const slower: Columns = {
      t: every(columns.t),
      x: every(columns.x),
      y: every(columns.y),
      z: every(columns.z),
      grasp: every(columns.grasp),
      tensions: columns.tensions.map(every),
    };
    expect(measure(slower, Infinity, { ...options, rateHz: 200 }).tremorRmsM).toBeCloseTo(0.001 * Math.SQRT1_2, 5);
  });

  it('ten closings on something, nine openings, held for about half the time; none dropped while moving', () => {
    expect(whole).toMatchObject({ graspHolds: 10, graspOpenings: 9, graspDrops: 0 });
    expect(whole.graspHoldS).toBeGreaterThan(18);
  });

  it('times of slack, saturation and near the limit, by cable and together', () => {
    expect(whole.slackS).toBeCloseTo(2.5, 6);
    expect(whole.saturatedS).toBeCloseTo(5, 6);
    expect(whole.saturatedShare).toBeCloseTo(0.125, 6);
    expect(whole.cables).toHaveLength(2);
    expect(whole.cables[0]).toMatchObject({ cable: 1, slackS: 0, saturatedS: 0 });
    expect(whole.cables[1]?.meanTensionN).toBeCloseTo((0.25 * 0.2 + 0.5 * 25 + 3.25 * 8) / 4, 6);
    expect(whole.cables[1]?.loadCycles).toBeGreaterThan(9);
  });

  it('a hold that opens while the hand moves is a drop', () => {
    const dropping = session(8, SEED);
    // Opens at 3.0 s, in the middle of the way back.
    for (let i = 3000; i < 8000; i++) dropping.grasp[i] = 0.04;
    expect(measure(dropping)).toMatchObject({ graspHolds: 1, graspOpenings: 1, graspDrops: 1 });
  });

  it('work and force of the hand: a constant push over a straight way', () => {
    const way = session(4, SEED);
    way.q = [0, 0, 0, 1].map((value) => way.t.map(() => value));
    way.wrench = [3, 4, 0, 0, 0, 0, 0].map((value) => way.t.map(() => value));
    const result = measure(way);
    const moved = (column: number[]): number => (column[column.length - 1] as number) - (column[0] as number);
    expect(result.workJ).toBeCloseTo(3 * moved(way.x) + 4 * moved(way.y), 9);
    expect(result.meanForceN).toBeCloseTo(5, 12);
    expect(result.peakForceN).toBeCloseTo(5, 12);
  });

  it('nothing is bridged over a gap: a jump while nothing was recorded is no movement', () => {
    const jump = session(2, SEED);
    for (let i = 0; i < 2000; i++) {
      jump.x[i] = i < 1000 ? 0 : 0.5;
      jump.y[i] = 0;
      jump.z[i] = 0;
      if (i >= 1000) jump.t[i] = (jump.t[i] as number) + 0.1;
    }
    expect(measure(jump)).toMatchObject({ pathLengthM: 0, peakSpeedMps: 0, movements: 0, movementUnits: 0 });
  });
});

describe('what cannot be measured is null and says why', () => {
  const named = (measures: RecordingMeasures): string[] => measures.notMeasured.map(({ measure: name }) => name);
  const empty: Columns = { t: [], x: [], y: [], z: [], grasp: [], tensions: [[], []] };

  it.each([
    ['empty', empty],
    ['of one sample', { t: [0], x: [0], y: [0], z: [0], grasp: [0], tensions: [[5], [5]] } as Columns],
    ['without positions', { ...session(2, SEED), x: new Array<number>(2000).fill(Number.NaN) } as Columns],
    ['without tensions', { ...session(2, SEED), tensions: [0, 1].map(() => new Array<number>(2000).fill(Number.NaN)) } as Columns],
    ['that stands still', { ...session(2, SEED), x: new Array(2000).fill(1), y: new Array(2000).fill(1), z: new Array(2000).fill(1) } as Columns],
  ])('a recording %s', (_what, columns) => {
    const measures = measure(columns);
    const isNull = Object.entries(measures).filter(([, value]) => value === null).map(([name]) => name);
    const isNullOfCable = measures.cables.filter((cable) => Object.values(cable).includes(null)).map(({ cable }) => `cables.${cable}`);
    expect(named(measures).sort()).toEqual([...isNull, ...isNullOfCable].sort());
    for (const value of Object.values(measures)) if (typeof value === 'number') expect(value).not.toBeNaN();
    for (const cable of measures.cables) for (const value of Object.values(cable)) expect(value).not.toBeNaN();
  });

  it('a hand that stands still has a path of no length, and no smoothness', () => {
    const still = { ...session(2, SEED), x: new Array<number>(2000).fill(1), y: new Array<number>(2000).fill(1), z: new Array<number>(2000).fill(1) };
    expect(measure(still)).toMatchObject({ pathLengthM: 0, movements: 0, sparc: null, ldlj: null, pauses: 1 });
  });
});

describe('the reference recordings', () => {
  interface Truth {
    moves: { what: string; distance: number }[];
  }
  it.each(['session-a', 'session-b'])('%s: holds and path agree with the planned movements', (name) => {
    const at = (file: string): URL => new URL(`../../conformance/recordings/${file}`, import.meta.url);
    const rows = gunzipSync(readFileSync(at(`${name}.csv.gz`))).toString('utf8').trim().split('\n').slice(1).map((line) => line.split(',').map(Number));
    const truth = JSON.parse(readFileSync(at(`${name}.truth.json`), 'utf8')) as Truth;
    const column = (index: number): number[] => rows.map((row) => row[index] as number);
    const columns: Columns = {
      t: column(0),
      x: column(1),
      y: column(2),
      z: column(3),
      grasp: column(8),
      tensions: Array.from({ length: 8 }, (_, k) => column(9 + k)),
    };
    const travel = name === 'session-a' ? { min: 0, max: 0.05 } : { min: 0, max: 0.8 };
    const measures = measure(columns, 1000, { ...options, cableCount: 8, grasp: travel });
    const planned = truth.moves.reduce((sum, { distance }) => sum + distance, 0);
    // Tremor and the incidents make the way longer, smoothing of the corners a little shorter.
    expect(measures.pathLengthM).toBeGreaterThan(0.98 * planned);
    expect(measures.pathLengthM).toBeLessThan(1.12 * planned);
    const closings = truth.moves.filter(({ what }) => what === 'close').length;
    // A closing that a gap cuts in two is not counted.
    expect(measures.graspHolds).toBeGreaterThanOrEqual(closings - 1);
    expect(measures.graspHolds).toBeLessThanOrEqual(closings);
    expect(measures.graspDrops).toBe(0);
  });
});

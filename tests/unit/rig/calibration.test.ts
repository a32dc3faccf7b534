/** Calibration against an external tracker: what is put in comes out, whatever the frame, the unit and the time. */
import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import {
  DEFAULT_TRACKING_TOLERANCES,
  geodesicAngle,
  multiply,
  orientationRepeatability,
  positionRepeatability,
  quatFromRotvec,
  registerOrientations,
  registerPoints,
  rotate,
  timeOffset,
  trackingError,
  withinTolerances,
  type Quat,
  type Vec3,
} from '@shared/rig';
import { seededRandom } from '@shared/stats/seeded-random';
import { SEED, orientation, outcome } from './rig-builders';

const runs = { seed: SEED, numRuns: 200 };
const coordinate = fc.double({ min: -1, max: 1, noNaN: true });
const point = fc.tuple(coordinate, coordinate, coordinate).map((v) => v as Vec3);
/** Points that surround their middle in two directions at least. */
const spread: readonly Vec3[] = [[0.3, 0, 0], [-0.3, 0.01, 0], [0, 0.2, 0], [0, -0.22, 0.01]];
const cloud = fc.array(point, { minLength: 0, maxLength: 8 }).map((points) => [...spread, ...points]);
const moved = (q: Quat, scale: number, t: Vec3, v: Vec3): Vec3 => rotate(q, v).map((value, axis) => scale * value + t[axis]!) as Vec3;

describe('registration of points', () => {
  it('gives back the rotation, translation and scale that moved them, flat sets included', () => {
    fc.assert(
      fc.property(cloud, fc.boolean(), orientation(Math.PI), point, fc.double({ min: 0.01, max: 100, noNaN: true }), (points, flat, q, t, scale) => {
        const from = flat ? points.map(([x, y]) => [x, y, 0.25] as Vec3) : points;
        const found = registerPoints(from, from.map((v) => moved(q, scale, t, v)), true);
        expect(geodesicAngle(found.q, q)).toBeLessThan(1e-9);
        expect(found.scale / scale).toBeCloseTo(1, 11);
        found.translation.forEach((value, axis) => expect(Math.abs(value - t[axis]!)).toBeLessThan(1e-9 * scale + 1e-12));
        expect(found.rmsResidual).toBeLessThan(1e-13 * scale + 1e-14);
        expect(registerPoints(from, from.map((v) => moved(q, 1, t, v))).scale).toBe(1);
      }),
      runs,
    );
  });

  it('a point in a far frame, or in millimetres, changes nothing but the translation', () => {
    const from = spread.map((v) => [...v] as Vec3);
    const q = quatFromRotvec([0.3, -1.2, 0.7]);
    const far: Vec3 = [4e6, -2e6, 1e6];
    const found = registerPoints(from, from.map((v) => moved(q, 1000, far, v)), true);
    expect(geodesicAngle(found.q, q)).toBeLessThan(1e-8);
    expect(found.scale).toBeCloseTo(1000, 4);
  });

  it('never turns points inside out: a mirrored set gets a proper rotation and a residual', () => {
    fc.assert(
      fc.property(cloud, (points) => {
        const solid: Vec3[] = [...points, [0.05, 0.02, 0.5], [0.02, -0.04, -0.4]];
        const found = outcome(() => registerPoints(solid, solid.map(([x, y, z]) => [x, y, -z] as Vec3)));
        fc.pre(typeof found !== 'string');
        const { rotation: [a, b, c], rmsResidual } = found as ReturnType<typeof registerPoints>;
        const determinant = a[0] * (b[1] * c[2] - b[2] * c[1]) - a[1] * (b[0] * c[2] - b[2] * c[0]) + a[2] * (b[0] * c[1] - b[1] * c[0]);
        expect(determinant).toBeCloseTo(1, 12);
        expect(rmsResidual).toBeGreaterThan(1e-3);
      }),
      runs,
    );
  });

  it('no other rotation leaves less', () => {
    fc.assert(
      fc.property(cloud, fc.array(point, { minLength: 12, maxLength: 12 }), orientation(0.2), (from, noise, nudge) => {
        const to = from.map((v, i) => [v[1] + 0.1 * noise[i % 12]![0], -v[0] + 0.1 * noise[i % 12]![1], v[2] + 0.1 * noise[i % 12]![2]] as Vec3);
        const found = registerPoints(from, to);
        const mean = (points: readonly Vec3[]) => [0, 1, 2].map((axis) => points.reduce((sum, v) => sum + v[axis]!, 0) / points.length) as Vec3;
        const [a, b] = [mean(from), mean(to)];
        const left = (q: Quat) => Math.sqrt(from.reduce((sum, v, i) => {
          const turned = rotate(q, [v[0] - a[0], v[1] - a[1], v[2] - a[2]]);
          return sum + turned.reduce((all, value, axis) => all + (value - to[i]![axis]! + b[axis]!) ** 2, 0);
        }, 0) / from.length);
        expect(left(found.q)).toBeCloseTo(found.rmsResidual, 12);
        expect(left(multiply(nudge, found.q))).toBeGreaterThanOrEqual(found.rmsResidual - 1e-12);
      }),
      runs,
    );
  });
});

describe('registration of orientations', () => {
  it('gives back the base rotation, whatever the signs of the quaternions', () => {
    fc.assert(
      fc.property(fc.array(orientation(Math.PI), { minLength: 1, maxLength: 9 }), orientation(Math.PI), (from, q) => {
        const to = from.map((one, i) => multiply(q, one).map((value) => (i % 2 === 0 ? value : -value)) as Quat);
        const found = registerOrientations(from, to);
        expect(geodesicAngle(found.q, q)).toBeLessThan(1e-12);
        expect(found.maxAngle).toBeLessThan(1e-12);
      }),
      runs,
    );
  });
});

describe('time offset', () => {
  const dt = 0.002;
  const wave = (t: number): number => Math.sin(2 * Math.PI * 1.3 * t) + 0.6 * Math.sin(2 * Math.PI * 2.9 * t + 1) + 0.3 * Math.sin(2 * Math.PI * 0.4 * t);
  const signal = (n: number, later: number): Float64Array => Float64Array.from({ length: n }, (_, i) => wave(i * dt - later));

  it('finds whole and broken lags of either sign, whatever the unit and offset of the second signal', () => {
    fc.assert(
      fc.property(fc.double({ min: -0.15, max: 0.15, noNaN: true }), fc.double({ min: 0.1, max: 1000, noNaN: true }), fc.double({ min: -1e4, max: 1e4, noNaN: true }), (later, unit, origin) => {
        const found = timeOffset(signal(2000, 0), signal(2000, later).map((value) => unit * value + origin), dt, 100);
        expect(Math.abs(found.offset - later)).toBeLessThan(0.1 * dt);
        expect(Math.abs(found.lagSamples - later / dt)).toBeLessThan(0.51);
        expect(found.peakCorrelation).toBeGreaterThan(0.999);
        expect(found.atLimit).toBe(false);
      }),
      { seed: SEED, numRuns: 25 },
    );
  });

  it('the other way round it is the opposite, and signals may differ in length', () => {
    const [a, b] = [signal(1500, 0), signal(1900, 0.0413)];
    const there = timeOffset(a, b, dt, 60);
    const back = timeOffset(b, a, dt, 60);
    expect(there.lagSamples).toBe(21);
    expect(back.lagSamples).toBe(-21);
    expect(back.offset).toBeCloseTo(-there.offset, 12);
  });

  it('holds in noise, and prefers the shorter way in a signal that repeats', () => {
    const random = seededRandom(SEED);
    const noisy = signal(3000, 0.05).map((value) => value + 0.2 * random.normal());
    expect(Math.abs(timeOffset(signal(3000, 0), noisy, dt, 100).offset - 0.05)).toBeLessThan(dt);
    const period = 50;
    const repeating = (shift: number) => Float64Array.from({ length: 1000 }, (_, i) => Math.sin((2 * Math.PI * (i - shift)) / period));
    expect(timeOffset(repeating(0), repeating(7), dt, 120).lagSamples).toBe(7);
  });

  it('says when the peak lies at the last lag tried, and passes over lags at which a signal stands still', () => {
    expect(timeOffset(signal(2000, 0), signal(2000, 0.2), dt, 80)).toMatchObject({ lagSamples: 80, offset: 80 * dt, atLimit: true });
    const pulse = (at: number) => Float64Array.from({ length: 60 }, (_, i) => Math.max(0, 5 - Math.abs(i - at)));
    expect(timeOffset(pulse(50), pulse(52), 1, 20)).toMatchObject({ lagSamples: 2, peakCorrelation: 1 });
    expect(timeOffset([1, 5, 2], [1, 5, 2], 1, 0)).toMatchObject({ lagSamples: 0, offset: 0, peakCorrelation: 1, atLimit: false });
  });
});

describe('tracking and repeatability', () => {
  it('errors of a known shift and turn are that shift and that turn in every figure', () => {
    const turn = quatFromRotvec([0, 0.02, 0]);
    const q = [quatFromRotvec([1, 2, -1]), quatFromRotvec([0.1, 0, 0])];
    const p: Vec3[] = [[0.1, 0.2, 0.3], [-0.1, 0, 0.05]];
    const error = trackingError(
      { p, q, grasp: [0.01, 0.02] },
      { p: p.map(([x, y, z]) => [x + 0.003, y, z - 0.004]), q: q.map((one) => multiply(turn, one)), grasp: [0.011, 0.018] },
    );
    for (const figure of [error.position.mean, error.position.rms, error.position.max, error.position.p95]) expect(figure).toBeCloseTo(0.005, 14);
    for (const figure of [error.rotation!.mean, error.rotation!.rms, error.rotation!.max, error.rotation!.p95]) expect(figure).toBeCloseTo(0.02, 14);
    expect(error.grasp).toMatchObject({ mean: expect.closeTo(0.0015, 12) as number, max: expect.closeTo(0.002, 12) as number });
    expect(withinTolerances(error)).toEqual({ position: false, rotation: true });
  });

  it('the default tolerances are 2 mm and 1.45 degrees, for 95 of 100 samples', () => {
    expect(DEFAULT_TRACKING_TOLERANCES).toEqual({ position: 0.002, rotation: 1.45 * (Math.PI / 180) });
    const at = (sizes: readonly number[]) => trackingError({ p: sizes.map(() => [0, 0, 0] as Vec3) }, { p: sizes.map((size) => [size, 0, 0] as Vec3) });
    const sizes = Array.from({ length: 101 }, (_, i) => (i < 96 ? 0.0019 : 0.05));
    expect(withinTolerances(at(sizes))).toEqual({ position: true });
    expect(withinTolerances(at(sizes.map((size, i) => (i === 95 ? 0.05 : size === 0.05 ? size : 0.0021))))).toEqual({ position: false });
  });

  it('repeatability by hand: four corners of a square of 2 mm, 1 mm beside the command', () => {
    const attained: Vec3[] = [[0.001, 0.001, 0], [-0.001, 0.001, 0], [-0.001, -0.001, 0], [0.001, -0.001, 0]];
    const found = positionRepeatability([0, 0, 0.001], attained);
    expect(found.ap).toBeCloseTo(0.001, 15);
    expect(found.lBar).toBeCloseTo(Math.SQRT2 / 1000, 15);
    expect(found.sL).toBeLessThan(1e-18);
    expect(found.rp).toBeCloseTo(Math.SQRT2 / 1000, 15);
  });

  it('of orientations: turns of 0.01 and 0.03 rad about base z leave a mean of 0.02 and three deviations of 0.0424', () => {
    const command = quatFromRotvec([0.4, -0.7, 1.9]);
    const found = orientationRepeatability(command, [0.01, 0.03].map((angle) => multiply(quatFromRotvec([0, 0, angle]), command)));
    expect(found.ap[2]).toBeCloseTo(0.02, 14);
    expect(found.rp[2]).toBeCloseTo(3 * 0.02 * Math.SQRT1_2, 14);
    expect(Math.max(found.ap[0], found.ap[1], found.rp[0], found.rp[1])).toBeLessThan(1e-15);
  });

  it('one approach has no spread, none have no middle', () => {
    expect(outcome(() => positionRepeatability([0, 0, 0], [[0, 0, 0]]))).toBe('TOO_SHORT');
    expect(outcome(() => orientationRepeatability([0, 0, 0, 1], []))).toBe('TOO_SHORT');
    expect(outcome(() => positionRepeatability([0, 0, 0], [[0, 0, 0], [Number.NaN, 0, 0]]))).toBe('BAD_REQUEST');
    expect(outcome(() => trackingError({ p: [[0, 0, Infinity]] }, { p: [[0, 0, 0]] }))).toBe('BAD_REQUEST');
    expect(outcome(() => trackingError({ p: [[0, 0, 0]], grasp: [1] }, { p: [[0, 0, 0]] }))).toBe('BAD_REQUEST');
  });
});

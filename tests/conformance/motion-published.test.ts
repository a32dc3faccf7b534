/** Motion measures against closed forms, standards and independent programs; the origin of every number stands beside it. */
import { describe, expect, it } from 'vitest';
import { bandPower } from '@shared/motion/band-power';
import { butterworthLowPass } from '@shared/motion/butterworth-low-pass';
import { filterZeroPhase } from '@shared/motion/filter-zero-phase';
import { logDimensionlessJerk } from '@shared/motion/log-dimensionless-jerk';
import { rainflow } from '@shared/motion/rainflow';
import { sparc } from '@shared/motion/sparc';
import { meanSpeed, peakSpeed, speedProfile } from '@shared/motion/speed-profile';
import { welchSpectrum } from '@shared/motion/welch-spectrum';
import { movementMeasures } from '@shared/motion/recording-measures/movement-measures';
import { reference } from './rig-reference';

/** Flash and Hogan 1985: position along a minimum-jerk reach of length D and duration T, at rest before and after. */
function minimumJerk(D: number, T: number, fs: number, restS = 0): number[] {
  return Array.from({ length: Math.round((T + 2 * restS) * fs) + 1 }, (_, i) => {
    const s = Math.min(1, Math.max(0, (i / fs - restS) / T));
    return D * (10 * s ** 3 - 15 * s ** 4 + 6 * s ** 5);
  });
}

interface Analytic {
  kind: string;
  D: number;
  T: number;
  peakSpeed: number;
  pathLength: number;
  ldlj: number;
}
const analytic = reference<{ cases: Analytic[] }>('smoothness').cases.filter(({ kind }) => kind === 'analytic');

describe.each(analytic)('a minimum-jerk reach of $D m in $T s', ({ D, T, peakSpeed: peak, ldlj }) => {
  const still = (n: number): number[] => new Array<number>(n).fill(0);

  it.each([[100, 0.08], [1000, 0.01]])('at %i Hz: peak 1.875 D/T, mean D/T, LDLJ -ln 204.8 within the share stated', (fs, tolerance) => {
    const x = minimumJerk(D, T, fs);
    const speed = speedProfile(x, still(x.length), still(x.length), fs);
    expect(peak).toBeCloseTo((1.875 * D) / T, 12);
    expect(Math.abs(peakSpeed(speed) / peak - 1)).toBeLessThan(tolerance);
    expect(Math.abs(meanSpeed(speed) / (D / T) - 1)).toBeLessThan(tolerance);
    expect(ldlj).toBeCloseTo(-Math.log(204.8), 12);
    expect(Math.abs(logDimensionlessJerk(speed, fs) / ldlj - 1)).toBeLessThan(tolerance);
  });

  it('is measured the same by the pass over a whole recording', () => {
    const x = minimumJerk(D, T, 1000, 1);
    const measures = movementMeasures(1000, undefined);
    for (const value of x) measures.push(value, 0.1, -0.2, Number.NaN);
    const result = measures.finish();
    // Rest at both ends makes the mean lower; length and peak keep to 1 %.
    expect(Math.abs((result.pathLengthM as number) / D - 1)).toBeLessThan(0.01);
    expect(Math.abs((result.peakSpeedMps as number) / peak - 1)).toBeLessThan(0.01);
    expect(result).toMatchObject({ movements: 1, movementUnits: 1, pauses: 2, graspOpenings: null });
    expect(result.extentXM).toBeCloseTo(D, 4);
    // One smooth reach, from valley to valley of its smoothed speed.
    expect(Math.abs((result.sparc as number) + 1.42)).toBeLessThan(0.1);
    expect(Math.abs((result.ldlj as number) + 5.32)).toBeLessThan(0.6);
  });
});

describe('smoothness', () => {
  it('does not depend on amplitude, and falls when submovements are added', () => {
    const fs = 200;
    const x = minimumJerk(0.3, 1, fs);
    const one = speedProfile(x, x.map(() => 0), x.map(() => 0), fs);
    const two = Float64Array.from({ length: one.length + 60 }, (_, i) => (one[i] ?? 0) + (one[i - 60] ?? 0) * 0.8);
    for (const measure of [sparc, logDimensionlessJerk]) {
      expect(measure(one.map((value) => 1000 * value), fs)).toBeCloseTo(measure(one, fs), 10);
      expect(measure(two, fs)).toBeLessThan(measure(one, fs));
    }
  });
});

describe('rainflow (ASTM E1049-85, 5.4.4, the worked example)', () => {
  const counted = rainflow([-2, 1, -3, 5, -1, 3, -4, 4, -2]);

  it('counts ranges 3: 0.5, 4: 1.5, 6: 0.5, 8: 1.0, 9: 0.5', () => {
    const byRange = new Map<number, number>();
    for (const { range, count } of counted) byRange.set(range, (byRange.get(range) ?? 0) + count);
    expect([...byRange]).toEqual([[3, 0.5], [4, 1.5], [6, 0.5], [8, 1], [9, 0.5]]);
  });

  it('with the means that follow from the peaks of each cycle', () => {
    expect(counted).toEqual([
      { range: 3, mean: -0.5, count: 0.5 },
      { range: 4, mean: -1, count: 0.5 },
      { range: 4, mean: 1, count: 1 },
      { range: 6, mean: 1, count: 0.5 },
      { range: 8, mean: 0, count: 0.5 },
      { range: 8, mean: 1, count: 0.5 },
      { range: 9, mean: 0.5, count: 0.5 },
    ]);
  });
});

describe('spectra and filters', () => {
  it('a sine of amplitude 2 has power 2 in its band and nearly none outside', () => {
    const fs = 250;
    const x = Float64Array.from({ length: 5000 }, (_, i) => 7 + 2 * Math.sin((2 * Math.PI * 10 * i) / fs));
    for (const nperseg of [250, 500, 512, 1000]) {
      const spectrum = welchSpectrum(x, fs, nperseg);
      expect(bandPower(spectrum, [8, 12])).toBeCloseTo(2, 2);
      expect(bandPower(spectrum, [20, 100])).toBeLessThan(1e-4);
    }
  });

  it('density sums to the variance of white noise of any segment length (Parseval)', () => {
    // A fixed irrational sequence, flat enough for 5 %.
    const x = Float64Array.from({ length: 20_000 }, (_, i) => ((i * i * 0.6180339887498949) % 1) - 0.5);
    for (const nperseg of [101, 128, 250, 777]) {
      const { f, psd } = welchSpectrum(x, 1, nperseg);
      const power = psd.reduce((sum, density) => sum + density, 0) * (f[1] as number);
      expect(Math.abs(power * 12 - 1)).toBeLessThan(0.05);
    }
  });

  it('a length that is no power of two agrees with the sum written out', () => {
    const x = Float64Array.from({ length: 90 }, (_, i) => Math.sin(i) + ((i * 37) % 11) / 11);
    const n = 90;
    const mean = x.reduce((sum, value) => sum + value, 0) / n;
    const window = Float64Array.from({ length: n }, (_, i) => 0.5 - 0.5 * Math.cos((2 * Math.PI * i) / n));
    const norm = window.reduce((sum, value) => sum + value * value, 0);
    const { psd } = welchSpectrum(x, 1, n);
    for (let k = 0; k < psd.length; k++) {
      let re = 0;
      let im = 0;
      for (let i = 0; i < n; i++) {
        const value = ((x[i] as number) - mean) * (window[i] as number);
        re += value * Math.cos((2 * Math.PI * k * i) / n);
        im -= value * Math.sin((2 * Math.PI * k * i) / n);
      }
      const wanted = ((k === 0 || 2 * k === n ? 1 : 2) * (re * re + im * im)) / norm;
      expect(Math.abs((psd[k] as number) / wanted - 1)).toBeLessThan(1e-9);
    }
  });

  it.each([[1, 5, 100], [2, 5, 100], [3, 20, 1000], [4, 6, 1000], [8, 2, 1000]])(
    'Butterworth order %i, %f Hz at %f Hz: gain 1 at rest, 1/sqrt 2 at the corner, 0 at half the rate',
    (order, fc, fs) => {
      const { sections } = butterworthLowPass(order, fc, fs);
      const gain = (f: number): number =>
        sections.reduce((product, { b0, b1, b2, a1, a2 }) => {
          const w = (2 * Math.PI * f) / fs;
          const size = (c0: number, c1: number, c2: number): number =>
            Math.hypot(c0 + c1 * Math.cos(w) + c2 * Math.cos(2 * w), c1 * Math.sin(w) + c2 * Math.sin(2 * w));
          return (product * size(b0, b1, b2)) / size(1, a1, a2);
        }, 1);
      expect(gain(0)).toBeCloseTo(1, 8);
      expect(gain(fc)).toBeCloseTo(Math.SQRT1_2, 7);
      expect(gain(fs / 2)).toBeCloseTo(0, 10);
    },
  );

  it('a zero-phase filter keeps a level, keeps a ramp, and does not shift a slow sine', () => {
    const filter = butterworthLowPass(4, 10, 1000);
    expect(Math.max(...filterZeroPhase(filter, new Float64Array(200).fill(3)).map((value) => Math.abs(value - 3)))).toBeLessThan(1e-9);
    const ramp = Float64Array.from({ length: 3000 }, (_, i) => 0.01 * i);
    const kept = filterZeroPhase(filter, ramp);
    for (let i = 1000; i < 2000; i++) expect(kept[i]).toBeCloseTo(ramp[i] as number, 6);
    const sine = Float64Array.from({ length: 4000 }, (_, i) => Math.sin((2 * Math.PI * i) / 1000));
    const slow = filterZeroPhase(filter, sine);
    for (let i = 1000; i < 3000; i++) expect(Math.abs((slow[i] as number) - (sine[i] as number))).toBeLessThan(1e-3);
  });
});

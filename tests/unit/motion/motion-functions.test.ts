/** Small laws of the motion functions, and what they refuse. Seeds are written down. */
import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { derivative } from '@shared/motion/derivative';
import { graspPhases, graspRule } from '@shared/motion/grasp-phases';
import { movementUnits } from '@shared/motion/movement-units';
import { passivity, passivityObserver } from '@shared/motion/passivity-observer';
import { pauses } from '@shared/motion/pauses';
import { rainflow, rainflowCounter } from '@shared/motion/rainflow';
import { meanSpeed, speedProfile } from '@shared/motion/speed-profile';
import { portEnergy, work } from '@shared/motion/work';
import { NumericError } from '@shared/rig';

const SEED = 20261;
const refuses = (run: () => unknown, code: string): void => {
  expect(run).toThrowError(NumericError);
  expect(run).toThrowError(expect.objectContaining({ code }) as Error);
};

describe('derivative', () => {
  it('is exact for parabolas, ends included', () => {
    const x = Array.from({ length: 12 }, (_, i) => 3 + 2 * (i / 50) - 4 * (i / 50) ** 2);
    derivative(x, 50).forEach((rate, i) => expect(rate).toBeCloseTo(2 - 8 * (i / 50), 10));
  });

  it('needs three samples and a rate', () => {
    refuses(() => derivative([1, 2], 50), 'TOO_SHORT');
    refuses(() => derivative([1, 2, 3], 0), 'BAD_REQUEST');
    refuses(() => derivative([1, Number.NaN, 3], 50), 'BAD_REQUEST');
    refuses(() => speedProfile([1, 2, 3], [1, 2], [1, 2, 3], 50), 'BAD_REQUEST');
    refuses(() => meanSpeed([1]), 'TOO_SHORT');
  });
});

describe('rainflow', () => {
  const series = fc.array(fc.integer({ min: -20, max: 20 }), { minLength: 2, maxLength: 60 });

  it('counts every reversal once: half the number of ranges between turning points', () => {
    fc.assert(
      fc.property(series, (values) => {
        const turning = values.filter((value, i) => i === 0 || value !== values[i - 1]);
        const reversals = turning.filter(
          (value, i) => i === 0 || i === turning.length - 1 || (value - (turning[i - 1] as number)) * ((turning[i + 1] as number) - value) < 0,
        );
        const total = rainflow(values).reduce((sum, { count }) => sum + count, 0);
        expect(total).toBe((reversals.length - 1) / 2);
      }),
      { seed: SEED, numRuns: 300 },
    );
  });

  it('finds the whole span, and mirrors and shifts with the series', () => {
    fc.assert(
      fc.property(series, (values) => {
        const cycles = rainflow(values);
        const span = Math.max(...values) - Math.min(...values);
        expect(cycles.at(-1)?.range ?? 0).toBe(span);
        const ranges = (from: number[]): unknown => rainflow(from).map(({ range, count }) => [range, count]).sort();
        expect(ranges(values.map((value) => 7 - value))).toEqual(ranges(values));
      }),
      { seed: SEED, numRuns: 300 },
    );
  });

  it('passes over reversals below the least range', () => {
    const found: number[] = [];
    const counter = rainflowCounter((range) => found.push(range), 1);
    for (const value of [0, 10, 9.5, 10.2, 9.6, 0, 0.4, 0, 10]) counter.push(value);
    counter.finish();
    expect(found).toEqual([10.2, 10.2, 10]);
  });

  it('merges cycles that differ by rounding only', () => {
    expect(rainflow([0, 0.3, 0, 0.1 + 0.2, 0])).toEqual([{ range: 0.3, mean: 0.15, count: 2 }]);
  });
});

describe('passivity', () => {
  it('one push at a time is the whole at once', () => {
    const f = Array.from({ length: 50 }, (_, i) => [Math.sin(i), Math.cos(3 * i)]);
    const v = Array.from({ length: 50 }, (_, i) => [Math.cos(i / 2), Math.sin(i)]);
    const observer = passivityObserver(0.01, 0.05);
    f.forEach((force, i) => observer.push((force[0] as number) * (v[i]?.[0] as number) + (force[1] as number) * (v[i]?.[1] as number)));
    expect(observer.result()).toEqual(passivity(f, v, 0.01, 0.05));
  });

  it('a damper is passive whatever the movement, its mirror image is not', () => {
    fc.assert(
      fc.property(fc.array(fc.double({ min: -1, max: 1, noNaN: true }), { minLength: 1, maxLength: 50 }), (speeds) => {
        const v = speeds.map((speed) => [speed]);
        expect(passivity(v.map(([speed]) => [3 * (speed as number)]), v, 0.001).passive).toBe(true);
        const energy = speeds.reduce((sum, speed) => sum + speed * speed, 0) * 0.003;
        expect(passivity(v.map(([speed]) => [-3 * (speed as number)]), v, 0.001).passive).toBe(energy <= 1e-12);
      }),
      { seed: SEED, numRuns: 100 },
    );
  });

  it('has nothing to say without a sample', () => {
    refuses(() => passivityObserver(0.01).result(), 'TOO_SHORT');
    refuses(() => passivityObserver(0), 'BAD_REQUEST');
  });
});

describe('work', () => {
  it('of a spring is the energy it stores', () => {
    const x = Array.from({ length: 101 }, (_, i) => i / 1000);
    expect(work(x.map((value) => 300 * value), x)).toBeCloseTo(0.5 * 300 * 0.1 ** 2, 12);
    refuses(() => work([1], [1]), 'TOO_SHORT');
  });

  it('of a moment over a turn is moment times angle, about any axis and whichever sign the quaternion has', () => {
    const energy = portEnergy();
    const axis = [2 / 3, -1 / 3, 2 / 3];
    for (let i = 0; i <= 200; i++) {
      const angle = i / 200;
      const sign = i % 3 === 0 ? -1 : 1;
      const q = [...axis.map((part) => sign * part * Math.sin(angle / 2)), sign * Math.cos(angle / 2)];
      energy.push({ p: [0, 0, 0], q, grasp: 0.001 * i, wrench: [9, 9, 9, ...axis.map((part) => 0.5 * part), 2] });
    }
    // 0.5 N m over 1 rad and 2 N over 0.2 m; small turns are taken as chords, 1e-6 short.
    expect(energy.energyJ).toBeCloseTo(0.5 + 0.4, 5);
    expect(energy.leastEnergyJ).toBe(0);
  });
});

describe('units, pauses, grasp', () => {
  const bump = (peak: number, n: number): number[] => Array.from({ length: n }, (_, i) => peak * Math.sin((Math.PI * i) / n) ** 2);

  it('two bumps with a real valley are two units, a shoulder is none', () => {
    expect(movementUnits([...bump(0.3, 50), ...bump(0.2, 50)])).toBe(2);
    expect(movementUnits(bump(0.3, 100).map((value, i) => value + 0.005 * Math.sin(i)))).toBe(1);
    expect(movementUnits(new Array<number>(50).fill(0.4))).toBe(0);
    refuses(() => movementUnits([]), 'TOO_SHORT');
  });

  it('finds rests of 0.2 s and more, with hysteresis, as [start, end)', () => {
    const speed = [...bump(0.3, 50), ...new Array<number>(30).fill(0.01), ...new Array<number>(5).fill(0.018), ...bump(0.3, 50).map((v) => v + 0.03)];
    const found = pauses(speed, 100);
    expect(found).toHaveLength(1);
    expect(found[0]?.end).toBe(85);
    expect(pauses(new Array<number>(10).fill(0), 100)).toEqual([]);
  });

  it('jaws that meet hold nothing; jaws that stop before hold something', () => {
    const rule = graspRule(0, 0.05);
    const rest = new Array<number>(60).fill(0);
    const move = (to: number): number[] => new Array<number>(60).fill(to);
    const empty = graspPhases([...move(0.04), ...move(0), ...move(0.04)], [...rest, ...rest, ...rest], 100, rule);
    expect(empty).toMatchObject({ closings: 1, holds: 0, openings: 1 });
    const full = graspPhases([...move(0.04), ...move(0.015), ...move(0.04)], [...rest, ...rest, ...rest], 100, rule);
    expect(full).toMatchObject({ closings: 1, holds: 1, openings: 1, drops: 0 });
    refuses(() => graspRule(0.05, 0), 'BAD_REQUEST');
    refuses(() => graspPhases([], [], 100, rule), 'TOO_SHORT');
  });
});

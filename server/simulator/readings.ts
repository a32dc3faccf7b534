/** What the sensors make of a true value: noise, and then their decimal grid. */
import type { Random } from './random';

/** Standard deviations: N, m, m, rad, and the grasp's part of its range. */
export type Noise = { tensionN: number; lengthM: number; positionM: number; turnRad: number; graspPart: number };

/** Sensors like those of the reference recordings: common practice, without source. */
export const usualNoise: Noise = { tensionN: 0.02, lengthM: 15e-6, positionM: 10e-6, turnRad: 1.5e-4, graspPart: 2e-4 };
export const noNoise: Noise = { tensionN: 0, lengthM: 0, positionM: 0, turnRad: 0, graspPart: 0 };

/** Steps of the sensors' grids a unit: 0.1 mN for tensions, 1 um for lengths, 1e-6 for pose and grasp. */
export const steps = { tension: 1e4, length: 1e6, pose: 1e6, wrench: 1e4 } as const;

export class Sensors {
  constructor(private readonly random: Random, private readonly exact: boolean) {}

  noise(deviation: number): number {
    return deviation === 0 ? 0 : deviation * this.random.normal();
  }

  /** @param perUnit steps of the grid a unit; an exact sensor has none */
  read(value: number, deviation: number, perUnit: number): number {
    const noisy = value + this.noise(deviation);
    return this.exact ? noisy : Math.round(noisy * perUnit) / perUnit;
  }
}

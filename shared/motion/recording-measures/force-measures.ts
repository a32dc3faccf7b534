import type { MeasureChunk } from '../measures';
import { portEnergy } from '../work';

export interface ForceMeasures {
  readonly meanForceN: number | null;
  readonly peakForceN: number | null;
  /** Work of the hand on the device. */
  readonly workJ: number | null;
  /** The least that work came to on the way: below 0 the rig had given more than it got. */
  readonly leastEnergyJ: number | null;
}

export interface ForceAccumulator {
  push(chunk: MeasureChunk, index: number): void;
  breakOff(): void;
  finish(): ForceMeasures;
}

/** Force and work of the hand where a recording carries the wrench; constant memory. */
export function forceMeasures(): ForceAccumulator {
  const energy = portEnergy();
  const p = new Float64Array(3);
  const q = new Float64Array(4);
  const wrench = new Float64Array(7);
  let sum = 0;
  let samples = 0;
  let peak = 0;
  let worked = false;
  return {
    push(chunk, index) {
      if (chunk.wrench === undefined) return;
      for (let i = 0; i < 7; i++) wrench[i] = chunk.wrench[i]?.[index] ?? Number.NaN;
      const size = Math.sqrt((wrench[0] as number) ** 2 + (wrench[1] as number) ** 2 + (wrench[2] as number) ** 2);
      if (!Number.isNaN(size)) {
        sum += size;
        samples += 1;
        if (size > peak) peak = size;
      }
      if (chunk.q === undefined) return;
      p[0] = chunk.x[index] as number;
      p[1] = chunk.y[index] as number;
      p[2] = chunk.z[index] as number;
      for (let i = 0; i < 4; i++) q[i] = (chunk.q[i] as ArrayLike<number>)[index] as number;
      const grasp = chunk.grasp[index] as number;
      if (missing(p) || missing(q) || missing(wrench) || Number.isNaN(grasp)) {
        energy.breakOff();
        return;
      }
      energy.push({ p, q, grasp, wrench });
      worked = true;
    },
    breakOff: () => energy.breakOff(),
    finish: () => ({
      meanForceN: samples > 0 ? sum / samples : null,
      peakForceN: samples > 0 ? peak : null,
      workJ: worked ? energy.energyJ : null,
      leastEnergyJ: worked ? energy.leastEnergyJ : null,
    }),
  };
}

function missing(values: Float64Array): boolean {
  for (let i = 0; i < values.length; i++) if (Number.isNaN(values[i])) return true;
  return false;
}

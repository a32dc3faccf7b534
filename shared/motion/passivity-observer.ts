import { NumericError } from '../rig/numeric-error';
import { requireSample } from '../stats/require-sample';

/** Energy below which a port counts as active [J]; covers the rounding of a sum, nothing more. */
const ROUNDING_J = 1e-12;

export interface PassivityResult {
  readonly passive: boolean;
  /** First sample with less than no energy; null when the port stays passive. */
  readonly firstNegativeIndex: number | null;
  readonly minEnergy: number;
  readonly minIndex: number;
  readonly finalEnergy: number;
}

/** Energy balance of one port, sample by sample, in constant memory. */
export interface PassivityObserver {
  /** @param power into the port [W] @returns energy of the port after this sample [J] */
  push(power: number): number;
  /** @throws NumericError TOO_SHORT before the first sample */
  result(): PassivityResult;
}

/**
 * Passivity observer with a fixed step: E_k = e0 + dt * sum of power up to and with sample k. Passive while E_k >= 0.
 *
 * @param dt sampling period [s]
 * @param e0 energy stored in the port at the start [J]
 * @throws NumericError BAD_REQUEST for a period that is not positive
 * @source Hannaford and Ryu 2002
 */
export function passivityObserver(dt: number, e0 = 0): PassivityObserver {
  if (!(dt > 0 && Number.isFinite(dt)) || !Number.isFinite(e0)) {
    throw new NumericError('BAD_REQUEST', 'The period must be positive and the stored energy a finite number.');
  }
  let sum = 0;
  let index = -1;
  let energy = e0;
  let minEnergy = Infinity;
  let minIndex = -1;
  let firstNegativeIndex: number | null = null;
  return {
    push(power) {
      index += 1;
      sum += power;
      energy = e0 + dt * sum;
      if (energy < minEnergy) {
        minEnergy = energy;
        minIndex = index;
      }
      if (firstNegativeIndex === null && energy < -ROUNDING_J) firstNegativeIndex = index;
      return energy;
    },
    result() {
      if (index < 0) throw new NumericError('TOO_SHORT', 'No sample was observed.');
      return { passive: firstNegativeIndex === null, firstNegativeIndex, minEnergy, minIndex, finalEnergy: energy };
    },
  };
}

/**
 * Energy balance of a port over a whole recording.
 *
 * @param f  forces, one row a sample, one column a coordinate [N, N m]
 * @param v  velocities of the same coordinates [m/s, rad/s]; f . v > 0 is power into the port
 * @param dt sampling period [s]
 * @param e0 energy stored at the start [J]
 * @throws NumericError TOO_SHORT without samples, BAD_REQUEST when rows do not match
 * @source Hannaford and Ryu 2002
 */
export function passivity(
  f: readonly (readonly number[])[],
  v: readonly (readonly number[])[],
  dt: number,
  e0 = 0,
): PassivityResult {
  if (f.length !== v.length) throw new NumericError('BAD_REQUEST', `f holds ${f.length} samples and v ${v.length}.`);
  const observer = passivityObserver(dt, e0);
  f.forEach((force, i) => {
    const velocity = v[i] as readonly number[];
    if (force.length !== velocity.length || force.length === 0) {
      throw new NumericError('BAD_REQUEST', `Sample ${i} has ${force.length} forces and ${velocity.length} velocities.`);
    }
    requireSample(force, 0, `f[${i}]`);
    requireSample(velocity, 0, `v[${i}]`);
    observer.push(force.reduce((power, value, j) => power + value * (velocity[j] as number), 0));
  });
  return observer.result();
}

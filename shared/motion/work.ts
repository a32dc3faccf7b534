import { NumericError } from '../rig/numeric-error';
import { requirePairs } from '../stats/require-sample';

/**
 * Work of a force along its coordinate, by trapezoids in the coordinate itself, so that no velocity need be derived.
 *
 * @param force    N, or N m for an angle
 * @param position m, or rad
 * @returns J; positive when the force pushed the way the coordinate went
 * @throws NumericError BAD_REQUEST for lists of different length, TOO_SHORT below two samples
 * @source definition of work; trapezoidal rule
 * @example work([2, 2, 2], [0, 0.1, 0.3]) // 0.6
 */
export function work(force: ArrayLike<number>, position: ArrayLike<number>): number {
  requirePairs(force, position, 2, ['force', 'position']);
  let energy = 0;
  for (let i = 1; i < force.length; i++) {
    energy += (((force[i] as number) + (force[i - 1] as number)) / 2) * ((position[i] as number) - (position[i - 1] as number));
  }
  return energy;
}

/** One sample of a seven-coordinate port: where it is and the wrench on it. */
export interface PortSample {
  /** Palm origin in the base frame [m]. */
  readonly p: ArrayLike<number>;
  /** Palm in base, (x, y, z, w), unit. */
  readonly q: ArrayLike<number>;
  /** m or rad. */
  readonly grasp: number;
  /** Force [N], moment about the palm origin in base axes [N m], grasp force [N or N m]. */
  readonly wrench: ArrayLike<number>;
}

/** Energy that went through a port, in constant memory. */
export interface PortEnergy {
  /** Takes the next sample. @returns energy so far [J] */
  push(sample: PortSample): number;
  /** The next sample does not follow from the last one: no work is reckoned across. */
  breakOff(): void;
  readonly energyJ: number;
  /** Least energy reached, 0 at the start: below 0 the rig gave more than it was given. */
  readonly leastEnergyJ: number;
}

/**
 * Work of the hand's wrench on the palm and the grasp, sample by sample: trapezoids over the change of position, the rotation
 * between two orientations and the change of grasp.
 *
 * @source virtual work with the twist of the rig model; energy balance as in Hannaford and Ryu 2002
 */
export function portEnergy(): PortEnergy {
  const before = new Float64Array(15);
  let known = false;
  let energy = 0;
  let least = 0;
  return {
    push({ p, q, grasp, wrench }) {
      if (known) {
        const [x, y, z, w] = [q[0] as number, q[1] as number, q[2] as number, q[3] as number];
        const [x0, y0, z0, w0] = [before[3] as number, before[4] as number, before[5] as number, before[6] as number];
        // q * conjugate(q0): the small turn in base axes; twice its vector part is the angle along the axis.
        const turnW = w * w0 + x * x0 + y * y0 + z * z0;
        const sign = turnW < 0 ? -2 : 2;
        const change = [
          (p[0] as number) - (before[0] as number),
          (p[1] as number) - (before[1] as number),
          (p[2] as number) - (before[2] as number),
          sign * (x * w0 - w * x0 - y * z0 + z * y0),
          sign * (y * w0 - w * y0 - z * x0 + x * z0),
          sign * (z * w0 - w * z0 - x * y0 + y * x0),
          grasp - (before[7] as number),
        ];
        for (let i = 0; i < 7; i++) energy += (((wrench[i] as number) + (before[8 + i] as number)) / 2) * (change[i] as number);
        if (!Number.isFinite(energy)) throw new NumericError('BAD_REQUEST', 'A sample of the port is not a finite number.');
        least = Math.min(least, energy);
      }
      for (let i = 0; i < 3; i++) before[i] = p[i] as number;
      for (let i = 0; i < 4; i++) before[3 + i] = q[i] as number;
      before[7] = grasp;
      for (let i = 0; i < 7; i++) before[8 + i] = wrench[i] as number;
      known = true;
      return energy;
    },
    breakOff() {
      known = false;
    },
    get energyJ() {
      return energy;
    },
    get leastEnergyJ() {
      return least;
    },
  };
}

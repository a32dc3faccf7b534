/** Tensions at the pose of the moment: within the rig's limits where these allow the wrench, else as near as they come. */
import { distributeTensions, structureMatrix, type Pose, type RigModel } from '@shared/rig';

/** Halvings of the search for a pull: it is good to one part in 4000. */
const HALVINGS = 12;

export class Statics {
  readonly #A: Float64Array;
  #pose: Pose;
  #stale = true;

  constructor(readonly rig: RigModel) {
    this.#A = new Float64Array(7 * rig.cableCount);
    this.#pose = rig.home;
  }

  moveTo(pose: Pose): void {
    this.#pose = pose;
    this.#stale = true;
  }

  /** @param out n [N], written in place. @returns whether the limits allow the wrench */
  hold(wrench: Float64Array, out: Float64Array): boolean {
    const answer = distributeTensions(this.rig, this.#pose, wrench);
    out.set(answer.tensions);
    return answer.feasible;
  }

  /** Lowers all tensions along what pulls on nothing, until the loosest cable would carry `levelN`; `share` of that way. */
  loosen(levelN: number, share: number, tensions: Float64Array): void {
    const still = distributeTensions(this.rig, this.#pose, new Float64Array(7));
    if (!still.feasible) return;
    let most = Infinity;
    for (let i = 0; i < tensions.length; i += 1) most = Math.min(most, ((tensions[i] as number) - levelN) / (still.tensions[i] as number));
    for (let i = 0; i < tensions.length; i += 1) tensions[i] = (tensions[i] as number) - share * most * (still.tensions[i] as number);
  }

  /** Adds a pull at one cable's attachment, away from its exit, to a wrench. */
  pull(cable: number, forceN: number, wrench: Float64Array): void {
    const n = this.rig.cableCount;
    if (this.#stale) structureMatrix(this.rig, this.#pose, this.#A);
    this.#stale = false;
    for (let row = 0; row < 7; row += 1) wrench[row] = (wrench[row] as number) - forceN * (this.#A[row * n + cable - 1] as number);
  }

  /** The pull [N] at one cable at which `reached` first holds, or the limits first forbid it. */
  pullUntil(cable: number, base: Float64Array, reached: (tensions: Float64Array) => boolean): number {
    const tensions = new Float64Array(this.rig.cableCount);
    const target = new Float64Array(7);
    let [low, high] = [0, 40 * this.rig.tensionMax];
    for (let i = 0; i < HALVINGS; i += 1) {
      const forceN = (low + high) / 2;
      target.set(base);
      this.pull(cable, forceN, target);
      if (this.hold(target, tensions) && !reached(tensions)) low = forceN;
      else high = forceN;
    }
    return high;
  }
}

/**
 * What the hand does to the rig: the wrench w of `A t + w = 0`, seven rows about the palm origin in base axes.
 *
 * The hand holds against everything that the rig renders (walls, the weight and the stiffness of a held thing), moves the
 * rig's own mass and drag, and a part of the wrench is the weight of the handle itself. The figures of the handle are ours.
 */
import type { HandState, SegmentEffect } from './motion';
import type { GraspedThing, VirtualWorld, Wall } from './tasks/task';

const GRAVITY = 9.81;
const HANDLE = { massKg: 0.18, apparentKg: 0.25, dragNsM: 1.5, dragNmsRad: 0.012, graspDrag: 4 };
/** The weight of a thing comes and goes over this time as it leaves the table, s. */
const WEIGHT_TIME_S = 0.06;
/** Below this speed friction fades to nothing, so that it has no jump, m/s. */
const CREEP = 0.004;

export class HandWrench {
  #between = false;
  #held = false;
  #weight = 0;

  /** @param graspArm 1 for sliding jaws, m for hinged jaws */
  constructor(private readonly world: VirtualWorld, private readonly graspArm: number, private readonly periodS: number) {}

  happened(effect: SegmentEffect): void {
    if (effect === 'surround') this.#between = true;
    if (effect === 'clear') this.#between = false;
    if (effect === 'take') this.#held = true;
    if (effect === 'let-go') this.#held = false;
  }

  /** @param out [force 3, moment 3, grasp], N and Nm, written in place */
  of(hand: HandState, out: Float64Array): void {
    for (let i = 0; i < 3; i += 1) {
      out[i] = HANDLE.apparentKg * (hand.a[i] as number) + HANDLE.dragNsM * (hand.v[i] as number);
      out[3 + i] = HANDLE.dragNmsRad * (hand.omega[i] as number);
    }
    out[6] = HANDLE.graspDrag * this.graspArm * this.graspArm * hand.graspRate;
    out[2] = (out[2] as number) - HANDLE.massKg * GRAVITY;
    for (const wall of this.world.walls) push(wall, hand, out);
    const thing = this.world.thing;
    if (thing) this.#carry(thing, hand, out);
  }

  #carry(thing: GraspedThing, hand: HandState, out: Float64Array): void {
    const target = this.#held ? thing.massKg * GRAVITY : 0;
    this.#weight += (target - this.#weight) * Math.min(1, this.periodS / WEIGHT_TIME_S);
    // The hand carries the thing: it pushes the rig up with the weight that the rig renders.
    out[2] = (out[2] as number) + this.#weight;
    const squeezed = thing.width - hand.grasp;
    if (this.#between && squeezed > 0) out[6] = (out[6] as number) - thing.stiffness * squeezed;
  }
}

/** The hand's push into a wall: minus what the wall's spring, damper and friction do to the hand. */
function push(wall: Wall, hand: HandState, out: Float64Array): void {
  const [nx, ny, nz] = wall.normal;
  const depth = -((hand.p[0] - wall.point[0]) * nx + (hand.p[1] - wall.point[1]) * ny + (hand.p[2] - wall.point[2]) * nz);
  if (depth <= 0) return;
  const away = hand.v[0] * nx + hand.v[1] * ny + hand.v[2] * nz;
  // A wall never pulls.
  const normal = Math.max(0, wall.stiffness * depth - wall.damping * away);
  const slide = [hand.v[0] - away * nx, hand.v[1] - away * ny, hand.v[2] - away * nz] as const;
  const speed = Math.hypot(...slide);
  const rub = (wall.friction * normal) / Math.max(speed, CREEP);
  out[0] = (out[0] as number) - normal * nx + rub * slide[0];
  out[1] = (out[1] as number) - normal * ny + rub * slide[1];
  out[2] = (out[2] as number) - normal * nz + rub * slide[2];
}

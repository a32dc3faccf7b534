/** The part of a rig's space that tasks use, found from the rig itself, so that any rig revision can be run. */
import { slerp, type Pose, type RigModel } from '@shared/rig';
import { Statics } from './statics';
import type { TaskRoom } from './tasks/task';

/** Half side of the cube of targets, as a part of the frame's smallest side. */
const REACH = 0.11;
/** Force that must be held in every direction where targets may lie, N. */
const SPARE_N = 4;
/** Arm that makes a grasp force of hinged jaws a moment, m. */
const HINGE_ARM_M = 0.04;
/** A comfortable squeeze takes this part of the largest that the rig can render at home, and never more than that many N. */
const GRIP_PART = 0.4;
const GRIP_MOST_N = 7;

/**
 * @throws RangeError when the rig cannot hold a hand's usual force at home: then there is nothing to simulate
 */
export function taskRoom(rig: RigModel): TaskRoom {
  const statics = new Statics(rig);
  const { min, max } = rig.frame;
  const side = Math.min(max[0] - min[0], max[1] - min[1], max[2] - min[2]);
  if (!holds(statics, rig.home)) throw new RangeError(`The rig ${rig.file.code} cannot hold ${SPARE_N} N in every direction at home, so no task can be run on it.`);
  const graspArm = rig.graspKind === 'slide' ? 1 : HINGE_ARM_M;
  return {
    home: rig.home,
    reachM: REACH * side,
    graspMin: rig.graspRange.min,
    graspMax: rig.graspRange.max,
    graspArm,
    grip: Math.min(GRIP_MOST_N * graspArm, GRIP_PART * largestGrip(statics)),
    within(pose) {
      for (let part = 1; part > 0.05; part -= 0.1) {
        const nearer = part === 1 ? pose : towardsHome(rig.home, pose, part);
        if (holds(statics, nearer)) return nearer;
      }
      return { ...rig.home, grasp: pose.grasp };
    },
  };
}

/** The largest squeeze, N or Nm, at home that leaves every cable within its limits; found by doubling and halving. */
function largestGrip(statics: Statics): number {
  const wrench = new Float64Array(7);
  const tensions = new Float64Array(statics.rig.cableCount);
  statics.moveTo(statics.rig.home);
  const held = (force: number) => {
    wrench[6] = -force;
    return statics.hold(wrench, tensions);
  };
  let most = 1e-3;
  while (most < 1e3 && held(2 * most)) most *= 2;
  for (let step = most / 2; step > most / 64; step /= 2) if (held(most + step)) most += step;
  return most;
}

function towardsHome(home: Pose, pose: Pose, part: number): Pose {
  const between = (i: 0 | 1 | 2) => home.p[i] + part * (pose.p[i] - home.p[i]);
  return { p: [between(0), between(1), between(2)], q: slerp(home.q, pose.q, part), grasp: pose.grasp };
}

function holds(statics: Statics, pose: Pose): boolean {
  const wrench = new Float64Array(7);
  const tensions = new Float64Array(statics.rig.cableCount);
  statics.moveTo(pose);
  for (let axis = 0; axis < 3; axis += 1) {
    for (const sign of [-1, 1]) {
      wrench.fill(0);
      wrench[axis] = sign * SPARE_N;
      if (!statics.hold(wrench, tensions)) return false;
    }
  }
  return true;
}

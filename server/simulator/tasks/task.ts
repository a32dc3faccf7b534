/** What a simulated participant is asked to do, and the virtual world that they do it in. SI units, base axes. */
import type { Pose, Quat, Vec3 } from '@shared/rig';
import { turned, type Segment } from '../motion';
import type { Random } from '../random';

/** A plane that pushes back: spring and damper along its normal, friction across it. */
export type Wall = {
  point: Vec3;
  /** Unit, out of the wall. */
  normal: Vec3;
  stiffness: number;
  damping: number;
  /** Coulomb friction coefficient. */
  friction: number;
};

/** Something that lies between the jaws when they close on it. */
export type GraspedThing = {
  /** Grasp at which the jaws touch it, m or rad. */
  width: number;
  massKg: number;
  /** N/m, or Nm/rad for hinged jaws. */
  stiffness: number;
};

export type VirtualWorld = { walls: readonly Wall[]; thing: GraspedThing | null };

/** The part of a rig's space in which tasks take place. */
export type TaskRoom = {
  home: Pose;
  /** Half the side of the cube around home in which targets lie, m. */
  reachM: number;
  graspMin: number;
  graspMax: number;
  /** 1 for sliding jaws; for hinged jaws the arm in m that makes a force a moment. */
  graspArm: number;
  /** A squeeze that the rig renders with ease, N or Nm. */
  grip: number;
  /** The pose, drawn towards home where the rig could not hold it. */
  within(pose: Pose): Pose;
};

export type Task = {
  code: string;
  title: string;
  describe: string;
  world(room: TaskRoom): VirtualWorld;
  /** Goes on for ever; starts at the room's home. */
  segments(room: TaskRoom, random: Random): Generator<Segment, never>;
};

/**
 * A pose of the room.
 *
 * @param place in parts of the reach, from home, base axes
 * @param turnRad rotation vector from home's orientation
 * @param open part of the grasp's range, 0 closed, 1 open
 */
export function poseIn(room: TaskRoom, place: Vec3, turnRad: Vec3, open: number): Pose {
  const q: Quat = [0, 0, 0, 1];
  turned(turnRad, 1, room.home.q, q);
  return room.within({
    p: [room.home.p[0] + place[0] * room.reachM, room.home.p[1] + place[1] * room.reachM, room.home.p[2] + place[2] * room.reachM],
    q,
    grasp: graspAt(room, open),
  });
}

export function graspAt(room: TaskRoom, open: number): number {
  return room.graspMin + open * (room.graspMax - room.graspMin);
}

export function distance(a: Pose, b: Pose): number {
  return Math.hypot(a.p[0] - b.p[0], a.p[1] - b.p[1], a.p[2] - b.p[2]);
}

/** The virtual plate that press and trace touch: it faces up, a little below home. */
import type { Vec3 } from '@shared/rig';
import type { TaskRoom, Wall } from './task';

/** Height of the plate, in parts of the reach. */
export const PLATE = -0.5;
const STIFFNESS = 1200;
const DAMPING = 6;

export function plate(room: TaskRoom, friction: number): Wall {
  const point: Vec3 = [room.home.p[0], room.home.p[1], room.home.p[2] + PLATE * room.reachM];
  return { point, normal: [0, 0, 1], stiffness: STIFFNESS, damping: DAMPING, friction };
}

/** Place, in parts of the reach, at which the plate pushes back with a force. */
export function pressed(room: TaskRoom, x: number, y: number, forceN: number): Vec3 {
  return [x, y, PLATE - forceN / STIFFNESS / room.reachM];
}

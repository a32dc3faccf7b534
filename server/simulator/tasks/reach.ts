import type { Vec3 } from '@shared/rig';
import { pause, reach } from './reaching';
import { poseIn, type Task } from './task';

/** Eight corners and six face centres of the cube: never twice the same in a row. */
const places: readonly Vec3[] = [
  [-1, -1, -1], [1, -1, -1], [-1, 1, -1], [1, 1, -1], [-1, -1, 1], [1, -1, 1], [-1, 1, 1], [1, 1, 1],
  [-1, 0, 0], [1, 0, 0], [0, -1, 0], [0, 1, 0], [0, 0, -1], [0, 0, 1],
];

/** Most that a target is turned about one axis, rad: 14 degrees. */
const TURN = 0.24;

export const reachTask: Task = {
  code: 'reach',
  title: 'Reach to shown targets',
  describe: 'free reaches between targets in position, orientation and grasp',
  world: () => ({ walls: [], thing: null }),
  *segments(room, random) {
    let here = room.home;
    let last = -1;
    for (let target = 1; ; target += 1) {
      let next = Math.floor(random.uniform() * places.length);
      if (next === last) next = (next + 1) % places.length;
      last = next;
      const turn: Vec3 = [random.between(-TURN, TURN), random.between(-TURN, TURN), random.between(-TURN, TURN)];
      const to = poseIn(room, places[next] as Vec3, turn, random.between(0.2, 0.85));
      yield* reach(here, to, random, `target ${target}`);
      yield pause(to, random.between(0.3, 0.9));
      here = to;
    }
  },
};

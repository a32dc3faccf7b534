import type { Vec3 } from '@shared/rig';
import type { Segment } from '../motion';
import { PLATE, plate, pressed } from './plate';
import { pause, reach } from './reaching';
import { poseIn, type Task } from './task';

/** Radius of the ring, in parts of the reach, and force while tracing, N. */
const RING = 0.7;
const TOUCH_N = 2.2;

export const traceTask: Task = {
  code: 'trace',
  title: 'Trace the ring',
  describe: 'follow a ring on a virtual plate with light pressure, one way and back',
  world: (room) => ({ walls: [plate(room, 0.25)], thing: null }),
  *segments(room, random) {
    const turn: Vec3 = [0, 0, 0];
    const on = (angle: number) => poseIn(room, pressed(room, RING * Math.cos(angle), RING * Math.sin(angle), TOUCH_N), turn, 0.3);
    const centre = poseIn(room, pressed(room, 0, 0, TOUCH_N), turn, 0.3);
    let angle = random.between(0, 2 * Math.PI);
    const above = poseIn(room, [RING * Math.cos(angle), RING * Math.sin(angle), PLATE + 0.4], turn, 0.3);
    yield* reach(room.home, above, random, 'start');
    yield { durationS: 0.7, to: on(angle) };
    for (let round = 1; ; round += 1) {
      const sweepRad = (round % 2 === 1 ? 1 : -1) * random.between(0.8, 1) * 2 * Math.PI;
      const arc: Segment['arc'] = { centre: centre.p, u: [1, 0, 0], v: [0, 1, 0], radiusM: RING * room.reachM, fromRad: angle, sweepRad };
      angle += sweepRad;
      yield { durationS: random.between(3.5, 5), to: on(angle), arc, mark: `round ${round}` };
      yield pause(on(angle), random.between(0.2, 0.6));
    }
  },
};

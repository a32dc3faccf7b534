import type { Vec3 } from '@shared/rig';
import { PLATE, plate, pressed } from './plate';
import { pause, reach } from './reaching';
import { poseIn, type Task } from './task';

export const pressTask: Task = {
  code: 'press',
  title: 'Press the plate and hold',
  describe: 'go to a spot, press a virtual plate with 3 to 8 N, hold, let go',
  world: (room) => ({ walls: [plate(room, 0.15)], thing: null }),
  *segments(room, random) {
    let here = room.home;
    for (let press = 1; ; press += 1) {
      const [x, y] = [random.between(-0.8, 0.8), random.between(-0.8, 0.8)];
      const turn: Vec3 = [random.between(-0.08, 0.08), random.between(-0.08, 0.08), random.between(-0.2, 0.2)];
      const forceN = random.between(3, 8);
      const above = poseIn(room, [x, y, PLATE + 0.4], turn, 0.35);
      yield* reach(here, above, random, `press ${press}`);
      yield pause(above, random.between(0.1, 0.3));
      yield { durationS: random.between(0.5, 0.8), to: poseIn(room, pressed(room, x, y, forceN), turn, 0.35) };
      // Held force wanders: nobody holds a newton still.
      for (let hold = 0; hold < 3; hold += 1) {
        yield { durationS: random.between(0.25, 0.45), to: poseIn(room, pressed(room, x, y, forceN * random.between(0.9, 1.1)), turn, 0.35) };
      }
      yield { durationS: random.between(0.4, 0.6), to: above };
      yield pause(above, random.between(0.3, 0.8));
      here = above;
    }
  },
};

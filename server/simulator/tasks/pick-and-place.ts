import type { Pose, Vec3 } from '@shared/rig';
import { pause, reach } from './reaching';
import { graspAt, poseIn, type Task } from './task';

/** The thing is held at this part of the grasp's range, and squeezed by that much of it. */
const HELD = 0.45;
const SQUEEZE = 0.09;

const spots: readonly Vec3[] = [[-0.8, -0.6, -0.8], [0.8, 0.5, -0.8], [0.1, -0.8, -0.8], [-0.3, 0.8, -0.8]];

export const pickAndPlaceTask: Task = {
  code: 'pick-and-place',
  title: 'Pick a block and place it',
  describe: 'grasp a virtual block, lift it, carry it to the next spot, set it down and let go',
  world: (room) => ({
    walls: [],
    thing: {
      width: graspAt(room, HELD),
      massKg: 0.25,
      stiffness: room.grip / (SQUEEZE * (room.graspMax - room.graspMin)),
    },
  }),
  *segments(room, random) {
    let here = room.home;
    let spot = Math.floor(random.uniform() * spots.length);
    for (let block = 1; ; block += 1) {
      const onto = (spot + 1 + Math.floor(random.uniform() * (spots.length - 1))) % spots.length;
      const [pick, place] = [spots[spot] as Vec3, spots[onto] as Vec3];
      const turn = (): Vec3 => [random.between(-0.1, 0.1), random.between(-0.1, 0.1), random.between(-0.25, 0.25)];
      const [turnA, turnB] = [turn(), turn()];
      const squeezed = HELD - SQUEEZE * random.between(0.8, 1.15);
      const over = (at: Vec3, t: Vec3, open: number): Pose => poseIn(room, [at[0], at[1], at[2] + 0.9], t, open);

      const above = over(pick, turnA, 0.85);
      yield* reach(here, above, random, `block ${block}`);
      const down = poseIn(room, pick, turnA, 0.85);
      yield { durationS: random.between(0.45, 0.65), to: down, effect: 'surround' };
      const gripped = { ...down, grasp: graspAt(room, squeezed) };
      yield { durationS: random.between(0.35, 0.5), to: gripped, effect: 'take' };
      yield pause(gripped, random.between(0.1, 0.25));
      const lifted = { ...above, grasp: gripped.grasp };
      yield { durationS: random.between(0.5, 0.7), to: lifted, mark: 'lifted' };
      const carried = over(place, turnB, squeezed);
      yield* reach(lifted, carried, random);
      const set = { ...poseIn(room, place, turnB, squeezed), grasp: gripped.grasp };
      yield { durationS: random.between(0.5, 0.7), to: set, effect: 'let-go' };
      const opened = { ...set, grasp: graspAt(room, 0.85) };
      yield { durationS: random.between(0.3, 0.45), to: opened, effect: 'clear', mark: 'placed' };
      here = over(place, turnB, 0.85);
      yield { durationS: random.between(0.45, 0.6), to: here };
      yield pause(here, random.between(0.3, 0.8));
      spot = onto;
    }
  },
};

/** How people reach: a first movement that lands nearly there, and a small one that corrects it. */
import type { Pose, Vec3 } from '@shared/rig';
import type { Segment } from '../motion';
import type { Random } from '../random';
import { distance } from './task';

/** Width of a target, m: what a reach may miss by. */
const TARGET_WIDTH_M = 0.006;

/**
 * Time that a reach takes.
 *
 * @source Fitts 1954, in the form a + b log2(D/W + 1) of MacKenzie 1992; a 0.30 s and b 0.16 s are within the usual range, from memory
 */
export function reachTime(distanceM: number): number {
  return 0.3 + 0.16 * Math.log2(distanceM / TARGET_WIDTH_M + 1);
}

/** From one pose to another in two movements with a breath between; a way of less than 1 cm takes one. */
export function* reach(from: Pose, to: Pose, random: Random, mark?: string): Generator<Segment> {
  const way = distance(from, to);
  const durationS = reachTime(way) * random.between(0.9, 1.15);
  if (way < 0.01) {
    yield { durationS, to, mark };
    return;
  }
  const part = random.between(0.93, 1.02);
  const miss = (): number => 0.015 * way * random.normal();
  const landing: Vec3 = [0, 1, 2].map((i) => (from.p[i] as number) + part * ((to.p[i] as number) - (from.p[i] as number)) + miss()) as Vec3;
  yield { durationS, to: { p: landing, q: to.q, grasp: to.grasp }, mark };
  yield pause({ p: landing, q: to.q, grasp: to.grasp }, random.between(0.06, 0.14));
  yield { durationS: random.between(0.2, 0.3), to };
}

export function pause(at: Pose, durationS: number): Segment {
  return { durationS, to: at };
}

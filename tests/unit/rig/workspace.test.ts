/** The closure workspace: what the sample rigs were searched for, and a caller that watches and stops. */
import { describe, expect, it } from 'vitest';
import {
  closure,
  geodesicAngle,
  graspsWithin,
  orientationsWithin,
  parseRig,
  positionOf,
  workspace,
  type RigModel,
  type Workspace,
  type WorkspaceOptions,
  type WorkspaceProgress,
} from '@shared/rig';
import { outcome, rigFile, sampleRig, type SampleRig } from './rig-builders';

function mapped(rig: RigModel, options: WorkspaceOptions): { progress: WorkspaceProgress[]; result: Workspace } {
  const generator = workspace(rig, options);
  const progress: WorkspaceProgress[] = [];
  for (;;) {
    const step = generator.next();
    if (step.done) return { progress, result: step.value };
    progress.push(step.value);
  }
}

const cube = { min: [-0.07, -0.07, -0.07], max: [0.07, 0.07, 0.07] } as const;
const ball = orientationsWithin((25 * Math.PI) / 180);

describe('workspace', () => {
  // The search that made the rigs (numpy, 20405 poses in the same cube, ball and grasp range) found these least indices, at corners.
  it.each<[SampleRig, number]>([['heron-8', 0.188], ['wren-8', 0.1097]])('%s closes throughout its 14 cm cube at 25 degrees, with index %f at worst', (code, least) => {
    const rig = sampleRig(code);
    const { result } = mapped(rig, { region: cube, counts: [3, 3, 3], orientations: ball, grasps: graspsWithin(rig.graspRange, 3) });
    expect(result.closed).toBe(27);
    expect(result.closedVolume).toBeCloseTo(0.14 ** 3, 12);
    expect(Math.min(...result.worstIndex)).toBeCloseTo(least, 4);
  });

  it('is the worst index over every orientation and grasp, position by position', () => {
    const rig = sampleRig('heron-8');
    const grasps = [0, 0.05];
    const orientations = orientationsWithin(0.9);
    const { result } = mapped(rig, { counts: [3, 2, 4], orientations, grasps });
    result.worstIndex.forEach((index, at) => {
      const p = positionOf(result, at);
      const indices = orientations.flatMap((q) => grasps.map((grasp) => closure(rig, { p, q, grasp }).closureIndex!));
      expect(index).toBe(Math.min(...indices));
    });
    expect(result.closed).toBe(result.worstIndex.filter((index) => index > 0).length);
    expect(result.closed).toBeLessThan(24);
    expect(positionOf(result, 0)).toEqual(rig.frame.min);
    expect(positionOf(result, 23)).toEqual(rig.frame.max);
  });

  it('more orientations never make it larger', () => {
    const rig = sampleRig('wren-8');
    const volume = (angle: number) => mapped(rig, { counts: [5, 5, 5], orientations: orientationsWithin(angle) }).result.closedVolume;
    expect(volume(0)).toBeGreaterThan(volume(0.5));
    expect(volume(0.5)).toBeGreaterThanOrEqual(volume(1));
  });

  it('says how far it is, up to the last pose', () => {
    const { progress } = mapped(sampleRig('heron-8'), { region: cube, counts: [5, 5, 5], orientations: ball, grasps: [0.02] });
    const total = 125 * 15;
    expect(progress.at(-1)).toEqual({ done: total, total });
    expect(progress.every(({ done }, i) => i === 0 || done > progress[i - 1]!.done)).toBe(true);
    expect(progress.length).toBeGreaterThan(2);
  });

  it('stops when its caller stops, after no more than what was asked for', () => {
    const generator = workspace(sampleRig('heron-8'), { counts: [100, 100, 100], orientations: ball, grasps: [0.02] });
    const first = generator.next().value as WorkspaceProgress;
    expect(first.done).toBeLessThan(1000);
    expect(first.total).toBe(15_000_000);
    expect(generator.return(undefined as never)).toEqual({ done: true, value: undefined });
    expect(generator.next()).toEqual({ done: true, value: undefined });
  });

  it('one position along an axis takes the middle', () => {
    const { result } = mapped(sampleRig('heron-8'), { region: cube, counts: [1, 3, 1] });
    expect([0, 1, 2].map((at) => positionOf(result, at))).toEqual([[0, -0.07, 0], [0, 0, 0], [0, 0.07, 0]]);
    expect(result.closedVolume).toBe(0);
  });

  it('where rank is lost or a cable has no length there is no index: -Infinity, outside', () => {
    const file = rigFile('heron-8');
    file.cables[0] = { exit: [0, 0, 0], attach: [0, 0, 0], body: 'palm' };
    file.home.p = [0.05, 0, 0];
    const tied = mapped(parseRig(file), { region: { min: [0, 0, 0], max: [0, 0, 0] }, counts: [1, 1, 1] }).result;
    expect([...tied.worstIndex]).toEqual([-Infinity]);
    expect(tied.closed).toBe(0);
    const stiff = rigFile('heron-8');
    for (const body of stiff.bodies) if (body.motion) body.motion.ratio = 0;
    expect([...mapped(parseRig(stiff), { region: cube, counts: [1, 1, 1] }).result.worstIndex]).toEqual([-Infinity]);
  });

  it('refuses grids, boxes and sets that are none, and more poses than anyone waits for', () => {
    const rig = sampleRig('heron-8');
    const first = (options: WorkspaceOptions) => outcome(() => workspace(rig, options).next());
    expect(first({ counts: [0, 1, 1] })).toBe('BAD_REQUEST');
    expect(first({ counts: [1.5, 1, 1] })).toBe('BAD_REQUEST');
    expect(first({ counts: [2, 2, 2], region: { min: [0, 0, 0], max: [-1, 1, 1] } })).toBe('BAD_REQUEST');
    expect(first({ counts: [2, 2, 2], region: { min: [0, 0, 0], max: [Number.NaN, 1, 1] } })).toBe('BAD_REQUEST');
    expect(first({ counts: [2, 2, 2], orientations: [] })).toBe('BAD_REQUEST');
    expect(first({ counts: [2, 2, 2], orientations: [[0, 0, 0, 2]] })).toBe('BAD_REQUEST');
    expect(first({ counts: [2, 2, 2], grasps: [Number.NaN] })).toBe('BAD_REQUEST');
    expect(first({ counts: [1000, 1000, 1000] })).toBe('BAD_REQUEST');
  });
});

describe('sets of orientations and grasps', () => {
  it('stand on the edge of the ball, about fourteen axes, beside the middle', () => {
    const middle = orientationsWithin(0)[0]!;
    const set = orientationsWithin(0.4, [0, 0, Math.SQRT1_2, Math.SQRT1_2]);
    expect(middle).toEqual([0, 0, 0, 1]);
    expect(set).toHaveLength(15);
    set.slice(1).forEach((q) => expect(geodesicAngle(q, set[0]!)).toBeCloseTo(0.4, 12));
    expect(new Set(set.map((q) => q.map((value) => value.toFixed(9)).join())).size).toBe(15);
    expect(outcome(() => orientationsWithin(4))).toBe('BAD_REQUEST');
  });

  it('grasps run from end to end', () => {
    expect(graspsWithin({ min: 0, max: 0.05 }, 3)).toEqual([0, 0.025, 0.05]);
    expect(graspsWithin({ min: 0, max: 1 }, 1)).toEqual([0.5]);
    expect(outcome(() => graspsWithin({ min: 0, max: 1 }, 0))).toBe('BAD_REQUEST');
  });
});

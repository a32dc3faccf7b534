import { structureMatrix } from '../kinematics/structure-matrix';
import { NumericError } from '../numeric-error';
import { requirePose, type Pose, type Quat, type Vec3 } from '../pose';
import type { RigModel } from '../rig-model';
import { closureOf } from '../statics/closure';
import { graspsWithin, orientationsWithin } from './orientation-set';

export type WorkspaceOptions = {
  /** m, in base: the box that is looked at; the rig's frame when absent. */
  readonly region?: { readonly min: Readonly<Vec3>; readonly max: Readonly<Vec3> };
  /** Positions along x, y and z, ends of the box included; 1 takes the middle. */
  readonly counts: Readonly<Vec3>;
  /** Palm in base, unit: all of them must close at a position. Home's when absent. */
  readonly orientations?: readonly Readonly<Quat>[];
  /** m or rad: all of them must close at a position. Both ends and the middle of the rig's range when absent. */
  readonly grasps?: readonly number[];
};

/** Poses looked at, of all positions x orientations x grasps. */
export type WorkspaceProgress = { readonly done: number; readonly total: number };

export type Workspace = {
  readonly counts: Vec3;
  /** m: first position, and the way to the next along each axis. */
  readonly origin: Vec3;
  readonly step: Vec3;
  /**
   * One per position, x fastest, then y, then z: the worst closure index over all orientations and grasps. Above 0 the
   * position belongs to the workspace. -Infinity where a pose lost rank or a cable has no length: no index exists there.
   */
  readonly worstIndex: Float64Array;
  /** Positions that belong to the workspace. */
  readonly closed: number;
  /** m^3: their share of the box, positions on its faces counting half a cell; 0 when an axis has one position only. */
  readonly closedVolume: number;
};

/** Poses between two reports: some ten milliseconds. */
const POSES_A_STEP = 500;
/** More than this takes minutes, and is mostly a slip of the keyboard. */
const MOST_POSES = 20_000_000;

/**
 * Wrench-closure workspace over a grid of positions, orientation-inclusive: a position counts when the rig can balance
 * any wrench there in every orientation and at every grasp asked for.
 *
 * A generator, so that the caller sees progress, keeps a window responsive and can stop: what is not pulled is not computed.
 *
 * @returns (from the generator) the grid; a caller that stops early has nothing
 * @throws NumericError BAD_REQUEST (at the first step) for counts, boxes, orientations or grasps that are none
 * @source wrench-closure workspace Gouttefarde and Gosselin 2006; orientation-inclusive (total orientation) workspace Merlet 2006 (cited from memory)
 */
export function* workspace(rig: RigModel, options: WorkspaceOptions): Generator<WorkspaceProgress, Workspace, void> {
  const grid = gridOf(options.region ?? rig.frame, options.counts);
  const poses = posesAt(rig, options);
  const positions = grid.counts[0] * grid.counts[1] * grid.counts[2];
  const total = positions * poses.length;
  if (total > MOST_POSES) throw new NumericError('BAD_REQUEST', `${total} poses are too many; take a coarser grid (at most ${MOST_POSES} poses).`);
  const worstIndex = new Float64Array(positions).fill(Infinity);
  const A = new Float64Array(7 * rig.cableCount);
  let done = 0;
  let closed = 0;
  let closedVolume = 0;
  for (let at = 0; at < positions; at++) {
    const p = positionOf(grid, at);
    for (const { q, grasp } of poses) {
      worstIndex[at] = Math.min(worstIndex[at]!, indexAt(rig, { p, q, grasp }, A));
      done++;
      if (done % POSES_A_STEP === 0) yield { done, total };
    }
    if (worstIndex[at]! > 0) {
      closed++;
      closedVolume += cellAt(grid, at);
    }
  }
  if (done % POSES_A_STEP !== 0) yield { done, total };
  return { ...grid, worstIndex, closed, closedVolume };
}

/** Position number `at` of a grid [m], x fastest. */
export function positionOf({ counts, origin, step }: Pick<Workspace, 'counts' | 'origin' | 'step'>, at: number): Vec3 {
  const place = placeOf(counts, at);
  return [origin[0] + place[0] * step[0], origin[1] + place[1] * step[1], origin[2] + place[2] * step[2]];
}

function placeOf([nx, ny]: Readonly<Vec3>, at: number): Vec3 {
  return [at % nx, Math.floor(at / nx) % ny, Math.floor(at / (nx * ny))];
}

/** m^3: the part of the box that is nearer to this position than to any other. */
function cellAt({ counts, step }: Pick<Workspace, 'counts' | 'step'>, at: number): number {
  return placeOf(counts, at).reduce((volume, k, axis) => volume * step[axis]! * (k === 0 || k === counts[axis]! - 1 ? 0.5 : 1), 1);
}

function gridOf(region: { readonly min: Readonly<Vec3>; readonly max: Readonly<Vec3> }, counts: Readonly<Vec3>): Pick<Workspace, 'counts' | 'origin' | 'step'> {
  if (counts.length !== 3 || !counts.every((count) => Number.isSafeInteger(count) && count >= 1)) {
    throw new NumericError('BAD_REQUEST', 'A grid needs a whole number of positions along x, y and z, 1 or more.');
  }
  if (![0, 1, 2].every((axis) => Number.isFinite(region.max[axis]! - region.min[axis]!) && region.min[axis]! <= region.max[axis]!)) {
    throw new NumericError('BAD_REQUEST', 'The box of a workspace needs finite corners, the lower one first.');
  }
  const along = (value: (axis: 0 | 1 | 2) => number): Vec3 => [value(0), value(1), value(2)];
  return {
    counts: [...counts],
    origin: along((axis) => (counts[axis] === 1 ? (region.min[axis] + region.max[axis]) / 2 : region.min[axis])),
    step: along((axis) => (counts[axis] === 1 ? 0 : (region.max[axis] - region.min[axis]) / (counts[axis] - 1))),
  };
}

/** Every orientation with every grasp, checked. */
function posesAt(rig: RigModel, options: WorkspaceOptions): { q: Quat; grasp: number }[] {
  const orientations = options.orientations ?? orientationsWithin(0, rig.home.q);
  const grasps = options.grasps ?? graspsWithin(rig.graspRange, 3);
  if (orientations.length === 0 || grasps.length === 0) throw new NumericError('BAD_REQUEST', 'A workspace needs at least one orientation and one grasp.');
  return orientations.flatMap((q) => grasps.map((grasp) => requirePose({ p: [0, 0, 0], q: [...q], grasp })));
}

function indexAt(rig: RigModel, pose: Pose, A: Float64Array): number {
  try {
    structureMatrix(rig, pose, A);
  } catch (error) {
    if (error instanceof NumericError && error.code === 'UNDEFINED') return -Infinity;
    throw error;
  }
  return closureOf(A, rig.cableCount).closureIndex ?? -Infinity;
}

import type { Pose, Vec3 } from './pose';
import type { RigFile } from './rig-file';

/**
 * A rig revision laid out for computing: one row of each array per cable, SI units.
 *
 * The attachment of cable i in the palm frame at grasp g is
 * `fixedPart + g slidePart + cos(hingeRatio g) cosPart + sin(hingeRatio g) sinPart`,
 * which covers palm, slide and hinge bodies without a branch: a slide has no cos and sin part, a hinge no slide part.
 */
export type RigModel = {
  readonly cableCount: number;
  /** 3 x n [m], in base. */
  readonly exits: Float64Array;
  /** 3 x n each [m] (slidePart: m per unit of grasp), in palm. */
  readonly fixedPart: Float64Array;
  readonly slidePart: Float64Array;
  readonly cosPart: Float64Array;
  readonly sinPart: Float64Array;
  /** n [rad per unit of grasp]; 0 for palm and slide. */
  readonly hingeRatio: Float64Array;
  /** N. */
  readonly tensionMin: number;
  readonly tensionMax: number;
  readonly slackBelow: number;
  readonly axialStiffness: number;
  readonly home: Pose;
  readonly frame: { readonly min: Vec3; readonly max: Vec3 };
  readonly graspKind: 'slide' | 'hinge';
  /** m or rad. */
  readonly graspRange: { readonly min: number; readonly max: number };
  readonly file: RigFile;
};

type Body = RigFile['bodies'][number];

/**
 * The computing form of a rig file. Takes the file as sound: run `checkRig` (or `parseRig`) first at a boundary.
 * Axes are brought to norm 1, so that a file with six decimals still turns its hinges rigidly.
 */
export function rigModel(file: RigFile): RigModel {
  const n = file.cables.length;
  const bodies = new Map(file.bodies.map((body) => [body.name, body]));
  const exits = new Float64Array(3 * n);
  const fixedPart = new Float64Array(3 * n);
  const slidePart = new Float64Array(3 * n);
  const cosPart = new Float64Array(3 * n);
  const sinPart = new Float64Array(3 * n);
  const hingeRatio = new Float64Array(n);
  file.cables.forEach((cable, i) => {
    const parts = attachmentParts(bodies.get(cable.body), cable.attach);
    exits.set(cable.exit, 3 * i);
    fixedPart.set(parts.fixed, 3 * i);
    slidePart.set(parts.slide, 3 * i);
    cosPart.set(parts.cos, 3 * i);
    sinPart.set(parts.sin, 3 * i);
    hingeRatio[i] = parts.ratio;
  });
  return {
    cableCount: n,
    exits,
    fixedPart,
    slidePart,
    cosPart,
    sinPart,
    hingeRatio,
    tensionMin: file.tensionMin,
    tensionMax: file.tensionMax,
    slackBelow: file.slackBelow,
    axialStiffness: file.axialStiffness,
    home: { p: [...file.home.p], q: unit(file.home.q), grasp: file.home.grasp },
    frame: { min: file.frame.min, max: file.frame.max },
    graspKind: file.grasp.kind,
    graspRange: { min: file.grasp.min, max: file.grasp.max },
    file,
  };
}

const ZERO: Vec3 = [0, 0, 0];

function attachmentParts(body: Body | undefined, attach: Vec3) {
  const motion = body?.motion;
  if (motion === undefined) return { fixed: attach, slide: ZERO, cos: ZERO, sin: ZERO, ratio: 0 };
  const [ax, ay, az] = unit(motion.axis);
  if (motion.kind === 'slide') {
    const slide: Vec3 = [motion.ratio * ax, motion.ratio * ay, motion.ratio * az];
    return { fixed: attach, slide, cos: ZERO, sin: ZERO, ratio: 0 };
  }
  // Rodrigues: Rot(axis, angle) arm = along + cos(angle) across + sin(angle) axis x arm
  const [ox, oy, oz] = motion.origin;
  const [mx, my, mz] = [attach[0] - ox, attach[1] - oy, attach[2] - oz];
  const along = ax * mx + ay * my + az * mz;
  return {
    fixed: [ox + along * ax, oy + along * ay, oz + along * az] satisfies Vec3,
    slide: ZERO,
    cos: [mx - along * ax, my - along * ay, mz - along * az] satisfies Vec3,
    sin: [ay * mz - az * my, az * mx - ax * mz, ax * my - ay * mx] satisfies Vec3,
    ratio: motion.ratio,
  };
}

function unit<T extends number[]>(vector: T): T {
  const norm = Math.hypot(...vector);
  return (norm === 0 ? vector : vector.map((value) => value / norm)) as T;
}

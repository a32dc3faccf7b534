import fc from 'fast-check';
import { readFileSync } from 'node:fs';
import { parseRig, quatFromRotvec, rigFileSchema, rotate, type Pose, type Quat, type RigFile, type RigModel, type Vec3 } from '@shared/rig';

/** Every property of these files starts from this seed. */
export const SEED = 20261;

export type SampleRig = 'heron-8' | 'wren-8';
export const SAMPLE_RIGS: readonly SampleRig[] = ['heron-8', 'wren-8'];

/** A sample rig's file, fresh for every call so that a test may change it. */
export function rigFile(code: SampleRig): RigFile {
  return rigFileSchema.parse(JSON.parse(readFileSync(new URL(`../../../samples/rigs/${code}.json`, import.meta.url), 'utf8')));
}

export function sampleRig(code: SampleRig): RigModel {
  return parseRig(rigFile(code));
}

/** Where cables nine to twelve come from and go to: corners of the frame, on the palm and on both jaws by turns. */
const MORE_CABLES: readonly (readonly [exit: Vec3, attach: Vec3])[] = [
  [[0.31, 0.02, 0.27], [0.03, 0.01, 0.05]],
  [[-0.3, -0.05, 0.26], [-0.028, 0.012, 0.047]],
  [[0.04, 0.29, -0.27], [0.01, 0.036, -0.044]],
  [[-0.06, -0.28, -0.25], [-0.016, -0.035, -0.05]],
];

/** A sample rig with 8 to 12 cables. */
export function rigWithCables(code: SampleRig, count: number): RigModel {
  const file = rigFile(code);
  MORE_CABLES.slice(0, count - 8).forEach(([exit, attach], k) => {
    file.cables.push({ exit, attach, body: file.bodies[k % file.bodies.length]!.name });
  });
  return parseRig(file);
}

/** The rig built `factor` times as large; a sliding grasp travels as much farther, a hinged one opens alike. */
export function scaledRig(file: RigFile, factor: number): RigFile {
  const by = (v: Vec3): Vec3 => [factor * v[0], factor * v[1], factor * v[2]];
  const graspFactor = file.grasp.kind === 'slide' ? factor : 1;
  return {
    ...file,
    bodies: file.bodies.map((body) => (body.motion?.kind === 'hinge' ? { ...body, motion: { ...body.motion, origin: by(body.motion.origin) } } : body)),
    cables: file.cables.map((cable) => ({ ...cable, exit: by(cable.exit), attach: by(cable.attach) })),
    grasp: { ...file.grasp, min: graspFactor * file.grasp.min, max: graspFactor * file.grasp.max },
    home: { ...file.home, p: by(file.home.p), grasp: graspFactor * file.home.grasp },
    frame: { min: by(file.frame.min), max: by(file.frame.max) },
  };
}

/** The rig with its frame turned by q about the base's origin: all exits turn, the palm stays as it is in its own axes. */
export function turnedRig(file: RigFile, q: Quat): RigFile {
  return {
    ...file,
    cables: file.cables.map((cable) => ({ ...cable, exit: rotate(q, cable.exit) })),
    frame: { min: [-1, -1, -1], max: [1, 1, 1] },
  };
}

/** Denormal numbers trip the libraries we compare with, and no hand turns by 1e-300 rad. */
const notDenormal = (value: number): number => (Math.abs(value) < 1e-9 ? 0 : value);

export const unit = fc.tuple(...[1, 2, 3].map(() => fc.double({ min: -1, max: 1, noNaN: true }).map(notDenormal))).filter((v) => Math.hypot(...v) > 0.1).map((v) => {
  const norm = Math.hypot(...v);
  return v.map((value) => value / norm) as Vec3;
});

/** Orientations turned by up to `most` rad about any axis. */
export function orientation(most: number): fc.Arbitrary<Quat> {
  return fc.tuple(unit, fc.double({ min: 0, max: most, noNaN: true }).map(notDenormal)).map(([axis, angle]) => quatFromRotvec([angle * axis[0], angle * axis[1], angle * axis[2]]));
}

/** Poses within the part of the frame where the sample rigs close: 14 cm cube, 25 degrees, the whole grasp. */
export function poseOf(rig: RigModel): fc.Arbitrary<Pose> {
  const place = fc.double({ min: -0.07, max: 0.07, noNaN: true });
  const { min, max } = rig.graspRange;
  return fc.record({
    p: fc.tuple(place, place, place),
    q: orientation((25 * Math.PI) / 180),
    grasp: fc.double({ min, max, noNaN: true }),
  });
}

/** Seven numbers: forces up to `force` N, moments and a hinged grasp up to `force` times 5 cm. */
export function wrenchOf(rig: RigModel, force: number): fc.Arbitrary<number[]> {
  const part = fc.double({ min: -1, max: 1, noNaN: true });
  const graspArm = rig.graspKind === 'hinge' ? 0.05 : 1;
  return fc.tuple(part, part, part, part, part, part, part).map((parts) => parts.map((value, row) => value * force * (row < 3 ? 1 : row < 6 ? 0.05 : graspArm)));
}

/** Code of the error that a call ends with, or its value. */
export function outcome(run: () => unknown): unknown {
  try {
    return run();
  } catch (error) {
    return (error as { code: unknown }).code;
  }
}

export function structureTimes(A: Float64Array, n: number, t: ArrayLike<number>): number[] {
  return Array.from({ length: 7 }, (_, row) => {
    let sum = 0;
    for (let i = 0; i < n; i++) sum += A[row * n + i]! * t[i]!;
    return sum;
  });
}

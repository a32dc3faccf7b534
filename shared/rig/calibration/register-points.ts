import { symmetricEigen } from '../linear-algebra/symmetric-eigen';
import { NumericError } from '../numeric-error';
import type { Quat, Vec3 } from '../pose';
import { canonical } from '../rotation/canonical';
import { normalised } from '../rotation/quaternion';
import { matrixFromQuat, type Matrix3 } from '../rotation/rotation-matrix';

export type PointRegistration = {
  /** Proper rotation from the `from` frame to the `to` frame, also as rows. */
  q: Quat;
  rotation: Matrix3;
  /** In the unit of the points: to = scale rotation from + translation. */
  translation: Vec3;
  /** 1 unless asked for. */
  scale: number;
  /** Root of the mean squared distance that is left. */
  rmsResidual: number;
};

/** Three points carry a rotation; two leave the turn about their line open. */
const FEWEST_POINTS = 3;
/** Share of the largest stretch below which the points count as lying on a line. No unit. */
const ON_A_LINE = 1e-10;

/**
 * Rotation, translation and, if asked for, scale that bring one set of points nearest to another (least squares).
 *
 * Always a proper rotation: mirrored sets get the best one without a reflection. Coplanar points are enough.
 *
 * @param from    points in one frame
 * @param to      the same points in the other, in the same order
 * @param scaled  true to fit a scale as well
 * @throws NumericError TOO_SHORT below three points, BAD_REQUEST for unequal numbers or values that are not finite,
 *         SINGULAR when the rotation is not unique (points on a line or in one place, mirror images without a preference)
 * @source Horn 1987 (largest eigenvector of the 4 x 4 matrix); same optimum as Kabsch 1976; scale after Umeyama 1991
 */
export function registerPoints(from: readonly Readonly<Vec3>[], to: readonly Readonly<Vec3>[], scaled = false): PointRegistration {
  if (from.length !== to.length) {
    throw new NumericError('BAD_REQUEST', `There are ${from.length} points on one side and ${to.length} on the other; each needs its partner.`);
  }
  if (![...from, ...to].every((point) => point.length === 3 && point.every(Number.isFinite))) {
    throw new NumericError('BAD_REQUEST', 'A point needs three finite numbers.');
  }
  if (from.length < FEWEST_POINTS) {
    throw new NumericError('TOO_SHORT', `${from.length} points do not fix a rotation; at least ${FEWEST_POINTS} are needed, not all on one line.`);
  }
  const fromCentre = centroid(from);
  const toCentre = centroid(to);
  const [a, b] = [from.map((point) => less(point, fromCentre)), to.map((point) => less(point, toCentre))];
  const q = bestRotation(a, b);
  const rotation = matrixFromQuat(q);
  const turned = a.map((point) => times(rotation, point));
  const scale = scaled ? fittedScale(turned, b) : 1;
  const centre = times(rotation, fromCentre);
  const translation: Vec3 = [toCentre[0] - scale * centre[0], toCentre[1] - scale * centre[1], toCentre[2] - scale * centre[2]];
  const squares = turned.reduce((sum, point, i) => sum + distance2(scaledBy(point, scale), b[i]!), 0);
  return { q, rotation, translation, scale, rmsResidual: Math.sqrt(squares / from.length) };
}

/** Quaternion of the largest eigenvalue of Horn's matrix for centred points. */
function bestRotation(a: readonly Vec3[], b: readonly Vec3[]): Quat {
  // Brought to size 1 first, so that micrometres and kilometres are told from a line alike.
  const size = Math.sqrt(sumOf(a, (p) => distance2(p, [0, 0, 0])) * sumOf(b, (p) => distance2(p, [0, 0, 0])));
  const S = [0, 1, 2].map((j) => [0, 1, 2].map((k) => a.reduce((sum, point, i) => sum + point[j]! * b[i]![k]!, 0) / size));
  const s = (j: number, k: number) => S[j]![k]!;
  if (!(size > 0)) throw onALine();
  const [x, y, z] = [s(1, 2) - s(2, 1), s(2, 0) - s(0, 2), s(0, 1) - s(1, 0)];
  const { values, vectors } = symmetricEigen([
    [s(0, 0) - s(1, 1) - s(2, 2), s(0, 1) + s(1, 0), s(2, 0) + s(0, 2), x],
    [s(0, 1) + s(1, 0), s(1, 1) - s(0, 0) - s(2, 2), s(1, 2) + s(2, 1), y],
    [s(2, 0) + s(0, 2), s(1, 2) + s(2, 1), s(2, 2) - s(0, 0) - s(1, 1), z],
    [x, y, z, s(0, 0) + s(1, 1) + s(2, 2)],
  ]);
  if (!(values[0]! - values[1]! > ON_A_LINE)) throw onALine();
  return canonical(normalised(vectors[0] as Quat));
}

function onALine(): NumericError {
  return new NumericError('SINGULAR', 'These points leave the rotation open: they lie on one line or in one place, or one set mirrors the other evenly. Add points off the line.');
}

/** Least-squares scale of points already turned: (turned . b) / (turned . turned). */
function fittedScale(turned: readonly Vec3[], b: readonly Vec3[]): number {
  const along = turned.reduce((sum, p, i) => sum + p[0] * b[i]![0] + p[1] * b[i]![1] + p[2] * b[i]![2], 0);
  return along / sumOf(turned, (p) => distance2(p, [0, 0, 0]));
}

function centroid(points: readonly Readonly<Vec3>[]): Vec3 {
  // About the first point, so that a frame far off does not eat the digits.
  const first = points[0]!;
  const mean = (axis: 0 | 1 | 2) => first[axis] + sumOf(points, (point) => point[axis] - first[axis]) / points.length;
  return [mean(0), mean(1), mean(2)];
}

function sumOf<T>(items: readonly T[], value: (item: T) => number): number {
  return items.reduce((sum, item) => sum + value(item), 0);
}

function less(a: Readonly<Vec3>, b: Readonly<Vec3>): Vec3 {
  return [a[0] - b[0], a[1] - b[1], a[2] - b[2]];
}

function scaledBy(a: Readonly<Vec3>, factor: number): Vec3 {
  return [factor * a[0], factor * a[1], factor * a[2]];
}

function distance2(a: Readonly<Vec3>, b: Readonly<Vec3>): number {
  return (a[0] - b[0]) ** 2 + (a[1] - b[1]) ** 2 + (a[2] - b[2]) ** 2;
}

function times(m: Matrix3, v: Readonly<Vec3>): Vec3 {
  const row = (k: 0 | 1 | 2) => m[k][0] * v[0] + m[k][1] * v[1] + m[k][2] * v[2];
  return [row(0), row(1), row(2)];
}

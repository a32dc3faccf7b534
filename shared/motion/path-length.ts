import { NumericError } from '../rig/numeric-error';
import { requireSample } from '../stats/require-sample';

/** Points of a path, each with the same number of coordinates [m]. */
export type PathPoints = readonly (readonly number[])[];

/**
 * Length of the way through the points, one straight piece after another.
 *
 * Noise lengthens a path at every sample: filter first when the rate is high.
 *
 * @param points two or more, in order [m]
 * @returns m
 * @throws NumericError TOO_SHORT below two points, BAD_REQUEST for points of different dimension
 */
export function pathLength(points: PathPoints): number {
  requirePoints(points);
  let length = 0;
  for (let i = 1; i < points.length; i++) length += distance(points[i - 1] as number[], points[i] as number[]);
  return length;
}

/**
 * Distance from the first point to the last.
 *
 * @returns m
 * @throws NumericError as `pathLength`
 */
export function straightLine(points: PathPoints): number {
  requirePoints(points);
  return distance(points[0] as number[], points[points.length - 1] as number[]);
}

/**
 * How much longer the way was than it needed to be: path length over straight line, 1 at best.
 *
 * @throws NumericError as `pathLength`, and UNDEFINED when the path ends where it began
 */
export function pathRatio(points: PathPoints): number {
  const direct = straightLine(points);
  const length = pathLength(points);
  if (direct <= 8 * Number.EPSILON * length || length === 0) {
    throw new NumericError('UNDEFINED', 'The path ends where it began, so it has no straight line to be compared with.');
  }
  return length / direct;
}

/**
 * Greatest speed over one piece of a path.
 *
 * @param fs sampling rate of the points [Hz]
 * @returns m/s
 * @throws NumericError as `pathLength`
 */
export function peakSegmentSpeed(points: PathPoints, fs: number): number {
  requirePoints(points);
  let longest = 0;
  for (let i = 1; i < points.length; i++) longest = Math.max(longest, distance(points[i - 1] as number[], points[i] as number[]));
  return longest * fs;
}

function requirePoints(points: PathPoints): void {
  const dimension = points[0]?.length ?? 0;
  points.forEach((point, i) => {
    if (point.length !== dimension || dimension === 0) {
      throw new NumericError('BAD_REQUEST', `Point ${i} has ${point.length} coordinates, the first ${dimension}.`);
    }
    requireSample(point, 0, `points[${i}]`);
  });
  if (points.length < 2) throw new NumericError('TOO_SHORT', 'A path needs two points or more.');
}

function distance(a: readonly number[], b: readonly number[]): number {
  let squares = 0;
  for (let i = 0; i < a.length; i++) squares += ((b[i] as number) - (a[i] as number)) ** 2;
  return Math.sqrt(squares);
}

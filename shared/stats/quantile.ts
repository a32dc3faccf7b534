import { requireSample } from './require-sample';

/**
 * Value below which a share of a sorted list lies, interpolated linearly between neighbours.
 *
 * @param sorted rising values, one or more
 * @param share  0 to 1
 * @throws NumericError TOO_SHORT for an empty list
 * @source definition 7 of Hyndman and Fan 1996, the default of common packages
 * @example quantile([1, 2, 3, 4], 0.5) // 2.5
 */
export function quantile(sorted: ArrayLike<number>, share: number): number {
  if (sorted.length === 0) requireSample(sorted, 1, 'The sample');
  const place = Math.min(1, Math.max(0, share)) * (sorted.length - 1);
  const below = Math.floor(place);
  const low = sorted[below] as number;
  const high = sorted[Math.min(sorted.length - 1, below + 1)] as number;
  return low + (high - low) * (place - below);
}

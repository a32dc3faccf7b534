import { NumericError } from '../rig/numeric-error';

/** Regions that work at a hand-held rig can strain. Our own choice, after the body maps in use since Corlett and Bishop. */
export const BODY_REGIONS = [
  'neck',
  'shoulderLeft',
  'shoulderRight',
  'upperArmLeft',
  'upperArmRight',
  'elbowLeft',
  'elbowRight',
  'forearmLeft',
  'forearmRight',
  'wristLeft',
  'wristRight',
  'handLeft',
  'handRight',
  'upperBack',
  'lowerBack',
  'legs',
  'eyes',
  'head',
] as const;
export type BodyRegion = (typeof BODY_REGIONS)[number];

/** 0 (none) to 10 (worst imaginable); null or absent where a region was not rated. */
export type DiscomfortRatings = Readonly<Partial<Record<BodyRegion, number | null>>>;

export interface Discomfort {
  /** Highest rating, and the regions that have it. */
  readonly highest: number;
  readonly highestAt: BodyRegion[];
  /** Over rated regions only. */
  readonly mean: number;
  readonly rated: number;
  readonly notRated: BodyRegion[];
}

/**
 * Discomfort by body region as a numeric rating from 0 to 10. A region that was not rated is not 0: it is left out and named.
 *
 * @throws NumericError BAD_REQUEST for a rating that is not a whole number 0 to 10, UNDEFINED when no region was rated
 * @source Corlett and Bishop 1976 (rating by region); numeric rating scale common practice
 */
export function discomfort(ratings: DiscomfortRatings): Discomfort {
  const rated = BODY_REGIONS.filter((region) => typeof ratings[region] === 'number');
  if (rated.length === 0) throw new NumericError('UNDEFINED', 'No region was rated, which is not the same as no discomfort.');
  const values = rated.map((region) => requireRating(region, ratings[region] as number));
  const highest = Math.max(...values);
  return {
    highest,
    highestAt: rated.filter((_, i) => values[i] === highest),
    mean: values.reduce((sum, value) => sum + value, 0) / values.length,
    rated: rated.length,
    notRated: BODY_REGIONS.filter((region) => !rated.includes(region)),
  };
}

export interface DiscomfortChange {
  /** After less before, of the regions rated both times. */
  readonly byRegion: Partial<Record<BodyRegion, number>>;
  /** Largest rise; 0 or less when nothing got worse. */
  readonly largestRise: number;
  readonly largestRiseAt: BodyRegion[];
}

/**
 * How discomfort changed over a session. Only regions rated before and after are compared.
 *
 * @throws NumericError BAD_REQUEST as `discomfort`, UNDEFINED when no region was rated both times
 */
export function discomfortChange(before: DiscomfortRatings, after: DiscomfortRatings): DiscomfortChange {
  const both = BODY_REGIONS.filter((region) => typeof before[region] === 'number' && typeof after[region] === 'number');
  if (both.length === 0) throw new NumericError('UNDEFINED', 'No region was rated both before and after.');
  const rises = both.map((region) => requireRating(region, after[region] as number) - requireRating(region, before[region] as number));
  const largestRise = Math.max(...rises);
  return {
    byRegion: Object.fromEntries(both.map((region, i) => [region, rises[i]])) as Partial<Record<BodyRegion, number>>,
    largestRise,
    largestRiseAt: both.filter((_, i) => rises[i] === largestRise),
  };
}

function requireRating(region: BodyRegion, rating: number): number {
  if (!Number.isInteger(rating) || rating < 0 || rating > 10) {
    throw new NumericError('BAD_REQUEST', `The rating of ${region} is ${rating}; ratings are whole numbers from 0 to 10.`);
  }
  return rating;
}

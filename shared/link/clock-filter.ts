/**
 * How far a device's clock is from the server's, from round trips.
 *
 * The server sends its time (t1), the device answers at once with its own (t2 = t3), the server notes when the answer
 * came (t4). The device's clock minus the server's is then t2 - (t1 + t4) / 2, wrong by at most half the round trip. Of
 * the latest eight round trips the quickest one counts (minimum-delay filter), and its bound grows with its age, because
 * clocks drift. Drift is the slope of a straight line through the quickest round trips of past stretches.
 *
 * @source Mills, Martin, Burbank and Kasch 2010 (RFC 5905): on-wire protocol, clock filter, 15 ppm frequency tolerance;
 *         cited from memory
 */

export interface RoundTrip {
  /** Server's clock when it asked and when the answer came, µs. */
  readonly askedUs: number;
  readonly answeredUs: number;
  /** Device's clock when it answered, µs. */
  readonly deviceUs: number;
}

export interface ClockEstimate {
  /** Device clock minus server clock at `atUs`, µs. */
  readonly offsetUs: number;
  /** Bound of its error, µs. */
  readonly uncertaintyUs: number;
  /** How much faster the device's clock runs, parts in a million; null until it can be told from the delays. */
  readonly driftPpm: number | null;
  /** Server's clock to which the offset belongs, µs. */
  readonly atUs: number;
}

/** Growth of the bound with age: the frequency tolerance of RFC 5905. */
export const TOLERANCE_PPM = 15;
const STAGES = 8;
const KEPT_POINTS = 64;
/** Round trips slower than this tell too little to be kept, µs. */
const SLOWEST_US = 5_000_000;

interface Point { readonly atUs: number; readonly offsetUs: number; readonly delayUs: number }

export interface ClockFilter {
  readonly stages: readonly Point[];
  /** Quickest round trip of each finished stretch of eight, for the drift. */
  readonly points: readonly Point[];
  readonly seen: number;
}

export const newClockFilter: ClockFilter = { stages: [], points: [], seen: 0 };

/** A round trip more. One that cannot be (answered before it was asked) or that took seconds changes nothing. */
export function addRoundTrip(filter: ClockFilter, trip: RoundTrip): ClockFilter {
  const delayUs = trip.answeredUs - trip.askedUs;
  if (!(delayUs >= 0) || delayUs > SLOWEST_US || !Number.isFinite(trip.deviceUs)) return filter;
  const middleUs = trip.askedUs + delayUs / 2;
  const point = { atUs: middleUs, offsetUs: trip.deviceUs - middleUs, delayUs };
  const stages = [...filter.stages, point].slice(-STAGES);
  const seen = filter.seen + 1;
  const points = seen % STAGES === 0 ? [...filter.points, quickest(stages, middleUs)].slice(-KEPT_POINTS) : filter.points;
  return { stages, points, seen };
}

/** Best estimate for a moment of the server's clock; null before the first round trip. */
export function estimateClock(filter: ClockFilter, atUs: number): ClockEstimate | null {
  if (filter.stages.length === 0) return null;
  const best = quickest(filter.stages, atUs);
  const driftPpm = drift(filter.points);
  const ageUs = atUs - best.atUs;
  return {
    offsetUs: best.offsetUs + (driftPpm === null ? 0 : ageUs * driftPpm * 1e-6),
    uncertaintyUs: best.delayUs / 2 + Math.abs(ageUs) * TOLERANCE_PPM * 1e-6,
    driftPpm,
    atUs,
  };
}

export interface WallTime {
  readonly serverUs: number;
  readonly uncertaintyUs: number;
}

/** Wall time by the server's clock of a moment of the device's clock, with the bound of its error. */
export function wallTimeOf(estimate: ClockEstimate, deviceUs: number): WallTime {
  const rate = 1 + (estimate.driftPpm ?? 0) * 1e-6;
  const sinceUs = (deviceUs - (estimate.atUs + estimate.offsetUs)) / rate;
  return { serverUs: estimate.atUs + sinceUs, uncertaintyUs: estimate.uncertaintyUs + Math.abs(sinceUs) * TOLERANCE_PPM * 1e-6 };
}

/** The one whose bound is smallest now: half its delay and what may have drifted since. */
function quickest(points: readonly Point[], atUs: number): Point {
  const bound = (point: Point) => point.delayUs / 2 + Math.abs(atUs - point.atUs) * TOLERANCE_PPM * 1e-6;
  return points.reduce((best, point) => (bound(point) <= bound(best) ? point : best));
}

/** Slope of offset over time by weighted least squares, ppm; null while its own error is above a tenth of the tolerance's. */
function drift(points: readonly Point[]): number | null {
  const origin = points[0];
  if (origin === undefined || points.length < 4) return null;
  // Times and offsets are epoch-sized: only their differences keep the digits.
  let w = 0, wx = 0, wy = 0;
  for (const point of points) {
    const weight = 1 / (point.delayUs + 1) ** 2;
    w += weight;
    wx += weight * (point.atUs - origin.atUs);
    wy += weight * (point.offsetUs - origin.offsetUs);
  }
  const meanX = wx / w, meanY = wy / w;
  let sxx = 0, sxy = 0, spread = 0;
  for (const point of points) {
    const weight = 1 / (point.delayUs + 1) ** 2;
    const x = point.atUs - origin.atUs - meanX;
    sxx += weight * x * x;
    sxy += weight * x * (point.offsetUs - origin.offsetUs - meanY);
    spread = Math.max(spread, Math.abs(x));
  }
  if (sxx === 0) return null;
  const quickestUs = Math.min(...points.map((point) => point.delayUs));
  const errorPpm = (quickestUs / 2 / spread) * 1e6;
  return errorPpm > 100 ? null : (sxy / sxx) * 1e6;
}

import type { Moment } from './source';
import { indexAt, type Stretch } from './stretch';

/** A time step longer than one and a half periods is a gap (recording file contract). */
export const GAP_PERIODS = 1.5;

/**
 * Fills `out` from a stretch: the sample at or just before `atS`, or the bucket it falls into.
 *
 * @returns true when the stretch has something to say about that moment, a gap included
 */
export function fillMoment(stretch: Stretch, atS: number, rateHz: number, out: Moment): boolean {
  const periodS = 1 / rateHz;
  // Half a period of grace: a moment typed as 2.595 must find the sample at 2.5950001.
  const index = indexAt(stretch.startsS, atS + periodS * 0.5);
  const startS = stretch.startsS[index];
  if (index < 0 || startS === undefined) return false;
  if (stretch.level === 'samples') {
    if (atS - startS > GAP_PERIODS * periodS) {
      if (index === stretch.count - 1) return false;
      return noValue(out, atS);
    }
  } else if (atS > (stretch.endsS[index] ?? startS) + periodS) {
    if (index === stretch.count - 1) return false;
    return noValue(out, atS);
  }
  const { values } = out;
  for (let channel = 0; channel < values.length; channel += 1) values[channel] = stretch.mean[channel * stretch.count + index] ?? Number.NaN;
  out.known = stretch.level === 'samples' ? 'sample' : 'average';
  out.atS = stretch.level === 'samples' ? startS : atS;
  return true;
}

function noValue(out: Moment, atS: number): true {
  out.values.fill(Number.NaN);
  out.known = 'gap';
  out.atS = atS;
  return true;
}

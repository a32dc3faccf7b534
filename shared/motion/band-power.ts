import { NumericError } from '../rig/numeric-error';
import type { Spectrum } from './welch-spectrum';

/** Where physiological hand tremor lies [Hz]; common practice. */
export const TREMOR_BAND_HZ: readonly [number, number] = [8, 12];

/**
 * Power of a signal between two frequencies: the density integrated by trapezoids over the bins inside, both ends included.
 *
 * @param band lowest and highest frequency [Hz]; 8 to 12 by default
 * @returns unit of the signal squared; its root is the RMS of that band
 * @throws NumericError BAD_REQUEST for a band that is not rising, UNDEFINED when fewer than two bins lie inside
 */
export function bandPower({ f, psd }: Spectrum, band: readonly [number, number] = TREMOR_BAND_HZ): number {
  const [low, high] = band;
  if (!(low >= 0 && high > low)) throw new NumericError('BAD_REQUEST', 'A band runs from a lower to a higher frequency, from 0 Hz on.');
  let power = 0;
  let inside = 0;
  for (let k = 0; k < f.length; k++) {
    const here = f[k] as number;
    if (here < low || here > high) continue;
    if (inside > 0) power += (((psd[k] as number) + (psd[k - 1] as number)) / 2) * (here - (f[k - 1] as number));
    inside += 1;
  }
  if (inside < 2) {
    throw new NumericError('UNDEFINED', `Fewer than two bins lie between ${low} and ${high} Hz; take longer segments.`);
  }
  return power;
}

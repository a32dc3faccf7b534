import {
  bandPower,
  butterworthLowPass,
  filterZeroPhase,
  logDimensionlessJerk,
  passivity,
  pathLength,
  pathRatio,
  peakSegmentSpeed,
  peakSpeed,
  rainflow,
  sparc,
  straightLine,
  welchSpectrum,
} from '@shared/motion';
import { z } from 'zod';
import { defineCall, numbers, rows } from './call';

/** Segment taken when a request names none, as far as the signal reaches. */
const USUAL_SEGMENT = 256;

// A port of one coordinate may be written as plain numbers.
const portRows = z.union([numbers.transform((values) => values.map((value) => [value])), rows]);

export const motionCalls = {
  'motion.speed': defineCall(z.object({ speed: numbers, fs: z.number() }), ({ speed, fs }) => ({
    sparc: sparc(speed, fs),
    ldlj: logDimensionlessJerk(speed, fs),
    peakSpeed: peakSpeed(speed),
  })),

  'motion.path': defineCall(z.object({ points: rows, fs: z.number().positive().optional() }), ({ points, fs }) => ({
    pathLength: pathLength(points),
    straightLine: straightLine(points),
    pathRatio: pathRatio(points),
    ...(fs === undefined ? {} : { peakSegmentSpeed: peakSegmentSpeed(points, fs) }),
  })),

  'motion.passivity': defineCall(z.object({ f: portRows, v: portRows, dt: z.number(), e0: z.number().default(0) }), ({ f, v, dt, e0 }) => {
    const result = passivity(f, v, dt, e0);
    const at = (index: number | null): number | null => (index === null ? null : index * dt);
    return { ...result, firstNegativeTime: at(result.firstNegativeIndex), minTime: at(result.minIndex) };
  }),

  'signal.lowpass': defineCall(
    z.object({ order: z.number(), fc: z.number(), fs: z.number(), x: numbers.optional() }),
    ({ order, fc, fs, x }) => {
      const filter = butterworthLowPass(order, fc, fs);
      return { b: filter.b, a: filter.a, ...(x === undefined ? {} : { filtfilt: filterZeroPhase(filter, x) }) };
    },
  ),

  'signal.welch': defineCall(
    z.object({ x: numbers, fs: z.number(), nperseg: z.number().optional(), band: z.tuple([z.number(), z.number()]).optional() }),
    ({ x, fs, nperseg, band }) => {
      const spectrum = welchSpectrum(x, fs, nperseg ?? Math.max(2, Math.min(USUAL_SEGMENT, x.length)));
      return { ...spectrum, bandPower: bandPower(spectrum, band) };
    },
  ),

  'fatigue.rainflow': defineCall(z.object({ series: numbers }), ({ series }) => rainflow(series)),
};

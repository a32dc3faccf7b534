/** The seconds of a running trial on screen: what came over the line, what was read from the book, and what was never recorded. */
import { describe, expect, test } from 'vitest';
import { channelNames, parseChannels } from '@shared/recording/channels';
import { createLiveSource, LIVE_PAGE_S } from '@client/replay/live/live-source';
import { emptyMoment } from '@client/replay/source';
import { stretchOfSamples } from '@client/replay/stretch';

const parsed = parseChannels(channelNames(8), 8);
if (!parsed.ok) throw new Error(parsed.error.message);
const { map } = parsed;
const width = map.names.length;
const rateHz = 250;

/** The value of every channel says which sample it is. */
const samples = (fromS: number, toS: number, everyS = 1 / rateHz) => {
  const count = Math.round((toS - fromS) / everyS);
  const timesS = Float64Array.from({ length: count }, (_, i) => fromS + i * everyS);
  const values = Float32Array.from({ length: count * width }, (_, k) => Math.fround((timesS[k % count] ?? 0) + Math.floor(k / count)));
  return { timesS, values };
};
const take = (source: ReturnType<typeof createLiveSource>, fromS: number, toS: number) => {
  const { timesS, values } = samples(fromS, toS);
  source.take(timesS, values);
};
/** What the book answers for a span: samples at the recording's own rate. */
const booked = (fromS: number, toS: number) => {
  const { timesS, values } = samples(fromS, toS, 0.001);
  return stretchOfSamples(timesS, values, { fromS, toS });
};
const valueAt = (source: ReturnType<typeof createLiveSource>, atS: number, channel: number) => {
  const moment = source.momentAt(atS, emptyMoment(map));
  return { known: moment.known, value: moment.values[channel] };
};

describe('a live source', () => {
  test('shows the newest seconds of what came, each sample where it belongs', () => {
    const source = createLiveSource(map, rateHz);
    for (let at = 0; at < 40; at += 0.1) take(source, at, at + 0.1);
    expect(source.newestS).toBeCloseTo(39.996, 6);
    expect(source.extent().toS - source.extent().fromS).toBe(LIVE_PAGE_S);
    for (const atS of [30, 35.5, 39.9]) expect(valueAt(source, atS, 5)).toEqual({ known: 'sample', value: Math.fround(Math.fround(atS) + 5) });
    expect(source.holes()).toEqual([]);
    const drawn = source.pieces(source.extent(), 1000).reduce((sum, { stretch, span }) => sum + stretch.startsS.filter((atS) => atS >= span.fromS && atS < span.toS).length, 0);
    expect(Math.abs(drawn - (source.newestS - source.extent().fromS) * rateHz)).toBeLessThanOrEqual(130);
  });

  test('says what did not come, and shows it once it was read from the book: it is no gap', () => {
    const source = createLiveSource(map, rateHz);
    take(source, 0, 1);
    take(source, 2, 4);
    expect(source.holes()).toEqual([{ fromS: expect.closeTo(0.996, 6) as number, toS: 2 }]);
    expect(source.gaps()).toEqual([]);
    source.merge(booked(0.996, 2), { fromS: 0.996, toS: 2 });
    expect(source.holes()).toEqual([]);
    expect(source.gaps()).toEqual([]);
    expect(Math.abs((valueAt(source, 1.5, 3).value ?? NaN) - 4.5)).toBeLessThanOrEqual(1 / rateHz);
    take(source, 4, 5);
    expect(valueAt(source, 4.5, 0)).toEqual({ known: 'sample', value: 4.5 });
  });

  test('of a page that was opened late, reads what came before', () => {
    const source = createLiveSource(map, rateHz);
    take(source, 8, 9.5);
    expect(source.holes()).toEqual([{ fromS: 0, toS: 8 }]);
    source.merge(booked(0, 8), { fromS: 0, toS: 8 });
    expect(source.holes()).toEqual([]);
    expect(valueAt(source, 0.5, 0)).toEqual({ known: 'sample', value: 0.5 });
    expect(valueAt(source, 9, 0)).toEqual({ known: 'sample', value: 9 });
  });

  test('what the book has not either is a gap of the recording', () => {
    const source = createLiveSource(map, rateHz);
    take(source, 0, 1);
    take(source, 1.4, 3);
    source.merge(stretchOfSamples(new Float64Array(0), new Float32Array(0), { fromS: 0.996, toS: 1.4 }), { fromS: 0.996, toS: 1.4 });
    expect(source.holes()).toEqual([]);
    expect(source.gaps()).toEqual([{ startS: expect.closeTo(0.996, 6) as number, endS: 1.4, missing: null }]);
    expect(valueAt(source, 1.2, 0).known).toBe('gap');
  });
});

/**
 * What holds for every recording: how it was cut into pieces changes nothing, and what is printed reads back the same.
 * Digest and buckets are computed a second time here from their definitions, sample by sample.
 */
import { createHash } from 'node:crypto';
import { readFileSync } from 'node:fs';
import { gunzipSync } from 'node:zlib';
import fc from 'fast-check';
import { describe, expect, test } from 'vitest';
import {
  bandsFromBlocks, bandsFromChunks, bucketSamples, channelNames, createCsvPrinter, createCsvReader, createPyramidBuilder, decodeChunk, decodePyramidBlock, encodeChunk,
  encodePyramidBlock, pyramidLevels, sampleHasher, type Chunk, type CsvReaderOptions, type PyramidBlock,
} from '@shared/recording';

const names = channelNames(8);
const bitsOf = (column: Float32Array) => [...new Uint32Array(column.buffer, column.byteOffset, column.length)];
const fromBits = (bits: readonly number[]) => new Float32Array(Uint32Array.from(bits).buffer);

/** The samples between the cuts, each piece a chunk of its own. */
function pieces(whole: Chunk, cuts: readonly number[]): Chunk[] {
  const edges = [0, ...[...new Set(cuts.map((cut) => cut % whole.count))].filter((cut) => cut > 0).sort((a, b) => a - b), whole.count];
  return edges.slice(1).map((to, i) => {
    const from = edges[i] as number;
    return { first: from, count: to - from, timesUs: whole.timesUs.slice(from, to), columns: whole.columns.map((column) => column.slice(from, to)) };
  });
}

function joined(chunks: readonly Chunk[]): Chunk {
  const count = chunks.reduce((sum, chunk) => sum + chunk.count, 0);
  const all: Chunk = { first: 0, count, timesUs: new Float64Array(count), columns: (chunks[0]?.columns ?? []).map(() => new Float32Array(count)) };
  let at = 0;
  for (const chunk of chunks) {
    expect(chunk.first).toBe(at);
    all.timesUs.set(chunk.timesUs, at);
    // As bit patterns: a NaN that is read as a number may lose its payload.
    all.columns.forEach((column, c) => new Uint32Array(column.buffer).set(bitsOf(chunk.columns[c] as Float32Array), at));
    at += chunk.count;
  }
  return all;
}

const cuts = fc.array(fc.nat(1 << 30), { maxLength: 40 });
/** Any bits at all, as a device may send them. */
const anyBits = fc.oneof(fc.nat(0xffffffff), fc.constantFrom(0x80000000, 0x7fc00001, 0xffc12345, 0x7f800001, 1, 0x80000001, 0x7f7fffff));
/** Finite, or not measured: what a file can hold. */
const measured = fc.oneof(fc.float({ noDefaultInfinity: true }), fc.constantFrom(-0, NaN, 1.4e-45, -3.4028234663852886e38), fc.integer({ min: -99999, max: 99999 }).map((k) => Math.fround(k / 1e4)));
const times = (count: number, startUs: fc.Arbitrary<number>, stepUs: fc.Arbitrary<number>) =>
  fc.tuple(startUs, fc.array(stepUs, { minLength: count, maxLength: count })).map(([start, steps]) => Float64Array.from(steps, ((at) => (step: number) => (at += step))(start)));
const wholeMicroseconds = (count: number) => times(count, fc.integer({ min: -(10 ** 9), max: 2 * 10 ** 15 }), fc.integer({ min: 1, max: 5 * 10 ** 6 }));

describe('the digest of a recording', () => {
  test('is SHA-256 of what its description says, whatever the chunks, and after the codec too', () => {
    const recording = fc.integer({ min: 1, max: 60 }).chain((count) => fc.record({
      first: fc.constant(0), count: fc.constant(count), timesUs: wholeMicroseconds(count),
      columns: fc.array(fc.array(anyBits, { minLength: count, maxLength: count }).map(fromBits), { minLength: 24, maxLength: 24 }),
    }));
    fc.assert(fc.property(recording, cuts, (whole, at) => {
      const bytes = Buffer.alloc(whole.count * (8 + 4 * 24));
      for (let i = 0; i < whole.count; i += 1) {
        bytes.writeDoubleLE(whole.timesUs[i] as number, i * 104);
        whole.columns.forEach((column, c) => bytes.writeUInt32LE(bitsOf(column)[i] as number, i * 104 + 8 + 4 * c));
      }
      const expected = createHash('sha256').update(`tautbook.samples/1\n${names.join(',')}\n`).update(bytes).digest('hex');
      for (const chunks of [[whole], pieces(whole, at), pieces(whole, at).map((piece) => decodeChunk(encodeChunk(piece)))]) {
        const hash = createHash('sha256');
        const hasher = sampleHasher(names, hash);
        chunks.forEach((chunk) => hasher.push(chunk));
        expect(hash.digest('hex')).toBe(expected);
      }
    }), { numRuns: 40 });
  });
});

describe('the pyramid', () => {
  const count = 40_000;
  /** Smooth, noisy with holes, small between large that cancel (where the order of additions shows in the mean), and never measured. */
  const whole = (seed: number): Chunk => {
    let state = seed >>> 0;
    const random = () => (state = (Math.imul(state, 1664525) + 1013904223) >>> 0) / 2 ** 32;
    const column = (of: (i: number) => number) => Float32Array.from({ length: count }, (_, i) => of(i));
    return {
      first: 0, count,
      timesUs: Float64Array.from({ length: count }, (_, i) => i * 1000 + (i > 17_000 ? 90_000 : 0)),
      columns: [column((i) => Math.round(1e4 * Math.sin(i / 900)) / 1e4), column(() => (random() < 0.3 ? NaN : random() - 0.5)), column((i) => [2 ** 40, random(), -(2 ** 40), random()][i % 4] as number), column(() => NaN)],
    };
  };
  const built = (chunks: readonly Chunk[]): PyramidBlock[] => {
    const builder = createPyramidBuilder(4);
    return [...chunks.flatMap((chunk) => builder.push(chunk)), ...builder.finish()].sort((a, b) => a.level - b.level || a.first - b.first);
  };
  const bits = (block: PyramidBlock) => ({ ...block, startsUs: [...block.startsUs], endsUs: [...block.endsUs], samples: [...block.samples], minima: block.minima.map(bitsOf), maxima: block.maxima.map(bitsOf), means: block.means.map(bitsOf), measured: block.measured.map(bitsOf) });

  test('is the same to the bit however the recording was cut', () => {
    fc.assert(fc.property(fc.nat(), cuts, (seed, at) => {
      expect(built(pieces(whole(seed), at)).map(bits)).toEqual(built([whole(seed)]).map(bits));
    }), { numRuns: 15 });
    const odd = Array.from({ length: count / 7 }, (_, i) => 7 * i);
    expect(built(pieces(whole(1), odd)).map(bits)).toEqual(built([whole(1)]).map(bits));
  });

  test('has in each bucket the least, the most and the mean of its samples, at every level', () => {
    const of = whole(5);
    const blocks = built([of]);
    for (let level = 1; level <= pyramidLevels; level += 1) {
      const size = bucketSamples(level);
      const here = blocks.filter((block) => block.level === level);
      expect(here.reduce((sum, block) => sum + block.count, 0)).toBe(Math.ceil(count / size));
      for (const block of here) {
        for (let b = 0; b < block.count; b += 1) {
          const from = (block.first + b) * size;
          const to = Math.min(count, from + size);
          expect([block.startsUs[b], block.endsUs[b], block.samples[b]]).toEqual([of.timesUs[from], of.timesUs[to - 1], to - from]);
          of.columns.forEach((column, c) => {
            const values = [...column.subarray(from, to)].filter((value) => !Number.isNaN(value));
            const none = values.length === 0;
            expect(block.measured[c]?.[b]).toBe(values.length);
            expect(block.minima[c]?.[b]).toBe(none ? NaN : Math.min(...values));
            expect(block.maxima[c]?.[b]).toBe(none ? NaN : Math.max(...values));
            const mean = none ? NaN : values.reduce((sum, value) => sum + value, 0) / values.length;
            const scale = none ? 1 : Math.max(...values.map(Math.abs));
            if (none) expect(block.means[c]?.[b]).toBeNaN();
            else expect(Math.abs((block.means[c]?.[b] as number) - mean)).toBeLessThanOrEqual(1e-7 * scale);
          });
        }
      }
    }
  });

  test('keeps every bit on its way through bytes', () => {
    for (const block of built([whole(9)])) expect(bits(decodePyramidBlock(encodePyramidBlock(block)))).toEqual(bits(block));
  });

  test('answers a window as the samples themselves do: nothing that they reach is left out, nothing is made up', () => {
    const of = whole(3);
    const blocks = built([of]).filter(({ level }) => level === 1);
    fc.assert(fc.property(fc.nat(count - 1), fc.nat(count - 1), fc.integer({ min: 1, max: 300 }), (a, b, buckets) => {
      const [fromUs, toUs] = [of.timesUs[Math.min(a, b)] as number, of.timesUs[Math.max(a, b)] as number];
      const bands = bandsFromBlocks(blocks, fromUs, toUs, buckets);
      expect(bands.count).toBeLessThanOrEqual(buckets);
      expect(bands.startsUs[0]).toBeLessThanOrEqual(fromUs);
      expect(bands.endsUs[bands.count - 1]).toBeGreaterThanOrEqual(toUs);
      for (const at of [0, bands.count >> 1, bands.count - 1]) {
        const same = bandsFromChunks([of], bands.startsUs[at] as number, bands.endsUs[at] as number, 1);
        for (let c = 0; c < 4; c += 1) {
          const [low, high] = [bands.bands[3 * bands.count * c + at], bands.bands[3 * bands.count * c + bands.count + at]];
          expect([low, high]).toEqual([same.bands[3 * c], same.bands[3 * c + 1]]);
        }
      }
    }), { numRuns: 60 });
  });

  test('of a recording that grows: full blocks and the tail hold every finished bucket once', () => {
    const of = whole(7);
    fc.assert(fc.property(fc.integer({ min: 1, max: count - 1 }), (now) => {
      const builder = createPyramidBuilder(4);
      const full = builder.push(pieces(of, [now])[0] as Chunk);
      for (let level = 1; level <= pyramidLevels; level += 1) {
        const held = [...full.filter((block) => block.level === level), builder.tail(level)].filter((block) => block !== null);
        const indices = held.flatMap((block) => Array.from({ length: block.count }, (_, b) => block.first + b));
        expect(indices).toEqual(Array.from({ length: Math.floor(now / bucketSamples(level)) }, (_, b) => b));
      }
    }), { numRuns: 30 });
  });
});

describe('a recording as CSV', () => {
  /** Reads the bytes cut anywhere. */
  const read = (text: string | Uint8Array, at: readonly number[] = [], options: CsvReaderOptions = {}) => {
    const bytes = typeof text === 'string' ? new TextEncoder().encode(text) : text;
    const reader = createCsvReader(options);
    const edges = [0, ...at.map((cut) => cut % (bytes.length + 1)).sort((a, b) => a - b), bytes.length];
    const chunks = edges.slice(1).flatMap((to, i) => reader.push(bytes.subarray(edges[i], to)));
    return { chunks: [...chunks, ...reader.finish()], reader };
  };
  const printed = (chunks: readonly Chunk[], decimals?: Parameters<typeof createCsvPrinter>[1]) => {
    const printer = createCsvPrinter(names, decimals);
    return printer.header() + chunks.map((chunk) => printer.rows(chunk)).join('');
  };
  /** A value that was not measured has no payload in a file. */
  const asRead = (column: Float32Array) => [...column].map((value) => (Number.isNaN(value) ? 'not measured' : Object.is(value, -0) ? '-0' : value));
  const recordingOf = (timesOf: (count: number) => fc.Arbitrary<Float64Array>) => fc.integer({ min: 1, max: 40 }).chain((count) => fc.record({
    first: fc.constant(0), count: fc.constant(count), timesUs: timesOf(count),
    columns: fc.array(fc.array(measured, { minLength: count, maxLength: count }).map((values) => Float32Array.from(values)), { minLength: 24, maxLength: 24 }),
  }));

  test.each([
    ['whole µs, since the start or since 1970', wholeMicroseconds],
    ['clocks finer than a µs', (count: number) => times(count, fc.double({ min: 0, max: 1e9, noNaN: true }), fc.double({ min: 1e-3, max: 1e4, noNaN: true }))],
  ])('comes back to the very float32 and the very time: %s', (_, timesOf) => {
    fc.assert(fc.property(recordingOf(timesOf), cuts, fc.integer({ min: 1, max: 50 }), (whole, at, chunkSamples) => {
      const { chunks, reader } = read(printed(pieces(whole, at)), at, { chunkSamples });
      expect(reader.faults).toEqual([]);
      const back = joined(chunks);
      expect([...back.timesUs]).toEqual([...whole.timesUs]);
      expect(back.columns.map(asRead)).toEqual(whole.columns.map(asRead));
    }), { numRuns: 60 });
  });

  test('comes back to the very digits, with as many decimals as each column had', () => {
    const text = fc.integer({ min: 1, max: 20 }).chain((rows) => fc.record({
      timeDecimals: fc.integer({ min: 3, max: 6 }), startS: fc.nat(1_900_000_000), decimals: fc.array(fc.nat(5), { minLength: 24, maxLength: 24 }),
      ks: fc.array(fc.array(fc.option(fc.integer({ min: -99999, max: 99999 }), { freq: 8 }), { minLength: 24, maxLength: 24 }), { minLength: rows, maxLength: rows }),
    })).map(({ timeDecimals, startS, decimals, ks }) => [['t_s', ...names].join(','), ...ks.map((row, i) => {
      const fraction = String(i + 1).padStart(timeDecimals, '0');
      return [`${startS}.${fraction}`, ...row.map((k, c) => (k === null ? '' : (k / 10 ** (decimals[c] as number)).toFixed(decimals[c])))].join(',');
    })].join('\n') + '\n');
    fc.assert(fc.property(text, cuts, (wanted, at) => {
      const { chunks, reader } = read(wanted, at);
      expect(printed(chunks, reader.decimals)).toBe(wanted);
    }), { numRuns: 100 });
  });

  test.each(['session-a', 'session-b'])('the reference recording %s is printed again to the byte', (name) => {
    const text = gunzipSync(readFileSync(new URL(`../../conformance/recordings/${name}.csv.gz`, import.meta.url)));
    const { chunks, reader } = read(text, [1, 1000, 12_345, 99_999]);
    expect(Buffer.from(printed(chunks, reader.decimals)).equals(text)).toBe(true);
  });

  test('has the same faults wherever it is cut, with either line end', () => {
    const row = (t: string) => [t, ...names.map(() => '1')].join(',');
    const good = [['t_s', ...names].join(','), row('0.001'), row('0.002'), row('0.003')];
    fc.assert(fc.property(fc.constantFrom('\n', '\r\n'), fc.constantFrom('', '\ufeff'), fc.nat(3), fc.nat(24), fc.constantFrom('', 'x', '1e99', '-', '1,1', '"1"', 'ö', '0'), cuts, (end, mark, line, column, bad, at) => {
      const text = mark + good.map((fields, l) => (l === line ? fields.split(',').map((field, c) => (c === column ? bad : field)).join(',') : fields)).join(end) + end;
      const [one, cut] = [read(text, [], { cableCount: 8 }), read(text, at, { cableCount: 8 })];
      expect(cut.reader.faults).toEqual(one.reader.faults);
      expect(cut.reader.samples).toBe(one.reader.samples);
      if (one.reader.faults.length > 0) expect(cut.chunks).toEqual([]);
    }), { numRuns: 200 });
  });
});

/** Chunks keep every bit. Seeds of the properties are fast-check's own, printed on failure; others are written here. */
import { constants, deflateRawSync, inflateRawSync } from 'node:zlib';
import fc from 'fast-check';
import { describe, expect, test } from 'vitest';
import { ChunkError, decodeChunk, encodeChunk, peekChunk, type Chunk, type Deflate, type Inflate } from '@shared/recording';
import { crc32 } from '@shared/recording/crc32';
import { riceDecode, riceEncode } from '@shared/recording/rice-code';

const native: Deflate = (bytes, how) => deflateRawSync(bytes, how === 'huffman' ? { strategy: constants.Z_HUFFMAN_ONLY, memLevel: 5 } : { level: 1 });
const nativeInflate: Inflate = (bytes, size) => inflateRawSync(bytes, { maxOutputLength: Math.max(1, size) });

const evenTimes = (count: number, stepUs = 1000) => Float64Array.from({ length: count }, (_, i) => i * stepUs);
const chunkOf = (columns: Float32Array[], timesUs = evenTimes(columns[0]?.length ?? 0)): Chunk => ({ first: 0, count: timesUs.length, timesUs, columns });
const bitsOf = (column: Float32Array) => [...new Uint32Array(column.buffer, column.byteOffset, column.length)];
const fromBits = (bits: number[]) => new Float32Array(Uint32Array.from(bits).buffer);
const codeOf = (run: () => unknown): string => {
  try {
    run();
  } catch (error) {
    if (error instanceof ChunkError) return error.code;
    throw error;
  }
  return 'none';
};

function expectSame(chunk: Chunk, back: Chunk): void {
  expect(back.first).toBe(chunk.first);
  expect(back.count).toBe(chunk.count);
  expect([...back.timesUs]).toEqual([...chunk.timesUs]);
  expect(back.columns.map(bitsOf)).toEqual(chunk.columns.map(bitsOf));
}

/** Linear congruential, for noise with a written seed. */
const noise = (seed: number) => () => {
  seed = (Math.imul(seed, 1664525) + 1013904223) >>> 0;
  return seed / 2 ** 32;
};

const anyColumn = (count: number) =>
  fc.oneof(
    fc.array(fc.nat(0xffffffff), { minLength: count, maxLength: count }).map(fromBits),
    fc.array(fc.integer({ min: -99999, max: 99999 }), { minLength: count, maxLength: count }).map((ks) => Float32Array.from(ks, (k) => k / 1e4)),
    fc.array(fc.constantFrom(0, -0, NaN, 0.5, 0.25), { minLength: count, maxLength: count }).map((values) => Float32Array.from(values)),
    fc.array(fc.float(), { minLength: count, maxLength: count }).map((values) => Float32Array.from(values)),
    fc.float().map((value) => new Float32Array(count).fill(value)),
  );
const anyChunk = fc.integer({ min: 1, max: 300 }).chain((count) =>
  fc.record({
    first: fc.nat(2 ** 31),
    count: fc.constant(count),
    timesUs: fc.oneof(
      fc.constant(evenTimes(count)),
      fc.array(fc.integer({ min: 1, max: 5e6 }), { minLength: count, maxLength: count }).map((steps) => Float64Array.from(steps, ((at) => (step: number) => (at += step))(0))),
      fc.array(fc.double({ min: 1e-3, max: 1e4, noNaN: true }), { minLength: count, maxLength: count }).map((steps) => Float64Array.from(steps, ((at) => (step: number) => (at += step))(0))),
    ),
    columns: fc.array(anyColumn(count), { maxLength: 5 }),
  }),
);

describe('a chunk comes back bit for bit', () => {
  test('whatever its values and times, with either DEFLATE', () => {
    fc.assert(
      fc.property(anyChunk, (chunk) => {
        const inBrowser = encodeChunk(chunk);
        expectSame(chunk, decodeChunk(inBrowser));
        const onServer = encodeChunk(chunk, native);
        expectSame(chunk, decodeChunk(onServer, nativeInflate));
        expectSame(chunk, decodeChunk(onServer));
      }),
      { numRuns: 150 },
    );
  });

  test('payloads of NaN and negative zero keep their bits on a sensor grid and off it', () => {
    const odd = [0x7fc00000, 0x7fc00001, 0xffc12345, 0x7f800001, 0x80000000, 0x7f800000, 0xff800000];
    const grid = Float32Array.from({ length: 1000 }, (_, i) => Math.round(1e4 * (13 + Math.sin(i / 50))) / 1e4);
    odd.forEach((bits, k) => (new Uint32Array(grid.buffer)[100 * k + 3] = bits));
    const free = Float32Array.from({ length: 1000 }, noise(11));
    odd.forEach((bits, k) => (new Uint32Array(free.buffer)[100 * k + 7] = bits));
    const chunk = chunkOf([grid, free]);
    expectSame(chunk, decodeChunk(encodeChunk(chunk)));
  });

  test('columns that are views into one block, as they arrive from a device', () => {
    const block = Float32Array.from({ length: 40 }, noise(3));
    const chunk = chunkOf([block.subarray(0, 20), block.subarray(20, 40)]);
    expectSame(chunk, decodeChunk(encodeChunk(chunk)));
  });
});

describe('size', () => {
  test('a column that stands still costs no more than its description', () => {
    const still = chunkOf([new Float32Array(1000).fill(0.0375)]);
    const none = chunkOf([], evenTimes(1000));
    expect(encodeChunk(still).length - encodeChunk(none).length).toBeLessThan(8);
  });

  test('a switch that is thrown twice in a second costs a few dozen bytes, not a bit a sample', () => {
    const column = Float32Array.from({ length: 1000 }, (_, i) => (i > 300 && i < 700 ? 1 : 0));
    expect(encodeChunk(chunkOf([column]), native).length).toBeLessThan(120);
  });

  test('each column takes its own way: a float column beside grid columns costs them nothing', () => {
    const random = noise(5);
    const grid = Float32Array.from({ length: 1000 }, () => Math.round(300 * random()) / 1e4);
    const free = Float32Array.from({ length: 1000 }, () => 0.5 + 1e-5 * random());
    const alone = encodeChunk(chunkOf([grid])).length;
    const float = encodeChunk(chunkOf([free])).length;
    const both = encodeChunk(chunkOf([grid, free])).length;
    expect(both).toBeLessThan(alone + float);
    // 300 levels: 8.2 bits each at least, 9.5 for differences of uniform noise; a float32 has 32.
    expect(alone).toBeLessThan(1300);
  });
});

describe('bytes that are no chunk are refused with a code', () => {
  const good = encodeChunk(chunkOf([Float32Array.from({ length: 50 }, noise(9)), new Float32Array(50)]));
  const changed = (at: number, value: number) => {
    const bytes = good.slice();
    bytes[at] = value;
    return bytes;
  };

  test.each([
    ['nothing', new Uint8Array(0), 'CHUNK_SHORT'],
    ['another file', changed(0, 0x50), 'CHUNK_MAGIC'],
    ['a newer version', changed(4, 9), 'CHUNK_VERSION'],
    ['a header that asks for no samples', changed(8, 0), 'CHUNK_CONTENT'],
    ['a cut tail', good.slice(0, good.length - 3), 'CHUNK_CHECKSUM'],
    ['bytes behind the end', Uint8Array.from([...good, 0]), 'CHUNK_CHECKSUM'],
  ])('%s', (_, bytes, code) => {
    expect(codeOf(() => decodeChunk(bytes))).toBe(code);
  });

  test('any single flipped bit behind the header is noticed', () => {
    fc.assert(
      fc.property(fc.integer({ min: 20, max: good.length - 1 }), fc.integer({ min: 0, max: 7 }), (at, bit) => {
        expect(codeOf(() => decodeChunk(changed(at, (good[at] as number) ^ (1 << bit))))).toBe('CHUNK_CHECKSUM');
      }),
    );
  });

  test('content that lies behind a right checksum ends in a typed error, never in memory or a hang', () => {
    fc.assert(
      fc.property(fc.array(fc.tuple(fc.integer({ min: 24, max: good.length - 1 }), fc.nat(255)), { minLength: 1, maxLength: 6 }), (edits) => {
        const bytes = good.slice();
        for (const [at, value] of edits) bytes[at] = value;
        new DataView(bytes.buffer).setUint32(20, crc32(bytes, 24), true);
        expect(['none', 'CHUNK_CONTENT']).toContain(codeOf(() => decodeChunk(bytes)));
      }),
      { numRuns: 300 },
    );
  });

  test('what cannot be a chunk is not encoded', () => {
    const column = new Float32Array(10);
    expect(codeOf(() => encodeChunk({ first: 0, count: 0, timesUs: new Float64Array(0), columns: [] }))).toBe('CHUNK_SHAPE');
    expect(codeOf(() => encodeChunk({ first: 0, count: 9, timesUs: evenTimes(9), columns: [column] }))).toBe('CHUNK_SHAPE');
    expect(codeOf(() => encodeChunk({ first: -1, count: 10, timesUs: evenTimes(10), columns: [column] }))).toBe('CHUNK_SHAPE');
  });

  test('a chunk tells its head without being decoded', () => {
    expect(peekChunk(encodeChunk({ ...chunkOf([new Float32Array(7), new Float32Array(7)]), first: 123456 }))).toEqual({ first: 123456, count: 7, columns: 2 });
  });
});

test('the checksum is CRC-32: its check value over 123456789 is cbf43926 (ISO 3309 polynomial, catalogue value)', () => {
  const digits = new TextEncoder().encode('123456789');
  expect(crc32(digits)).toBe(0xcbf43926);
  expect(crc32(Uint8Array.from([0, ...digits, 0]), 1, 10)).toBe(0xcbf43926);
});

test('Rice codes give back every 32-bit value, at every size', () => {
  const value = fc.integer({ min: 0, max: 31 }).chain((bits) => fc.nat(2 ** bits).map((v) => v | 0));
  fc.assert(
    fc.property(fc.array(fc.oneof(value, fc.constant(0), fc.constant(-1)), { minLength: 1, maxLength: 400 }), (values) => {
      const out = new Int32Array(values.length);
      riceDecode(riceEncode(Int32Array.from(values), values.length).slice(), values.length, out);
      expect([...out]).toEqual(values);
    }),
    { numRuns: 300 },
  );
});

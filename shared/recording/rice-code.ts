/**
 * Golomb-Rice codes (Golomb 1966, Rice 1979) of unsigned 32-bit values, in blocks of 128 with their own parameter.
 *
 * Differences of noisy sensors are near a geometric distribution, for which this code is near the entropy, and it runs
 * several times faster than Huffman codes on bytes. Bits fill little-endian words from the lowest up. Each block starts
 * with its parameter k in five bits (31: every value is zero, nothing follows); a value is its quotient by 2^k in unary
 * (zeros closed by a one), then k low bits. Twenty zeros and a one announce a value too large for that, in 32 bits.
 */
const blockSize = 128;
const allZero = 31;
const largestQuotient = 20;

let scratch = new Uint32Array(0);

/** @param values read as unsigned; @returns the bytes, a view of memory that holds until the next call */
export function riceEncode(values: Int32Array, count: number): Uint8Array {
  // The worst value takes 53 bits, a block's head 5.
  const room = 2 * count + 8;
  if (scratch.length < room) scratch = new Uint32Array(room);
  const words = scratch;
  let word = 0;
  let acc = 0;
  let filled = 0;
  for (let from = 0; from < count; from += blockSize) {
    const to = from + blockSize < count ? from + blockSize : count;
    const k = parameter(values, from, to);
    acc |= k << filled;
    filled += 5;
    if (filled >= 32) {
      words[word] = acc;
      word += 1;
      filled -= 32;
      acc = filled === 0 ? 0 : k >>> (5 - filled);
    }
    if (k === allZero) continue;
    const mask = (1 << k) - 1;
    for (let i = from; i < to; i += 1) {
      const value = values[i] as number;
      const quotient = value >>> k;
      let bits = 0;
      let size = 0;
      if (quotient < largestQuotient && quotient + k < 32) {
        bits = (1 << quotient) | ((value & mask) << (quotient + 1));
        size = quotient + 1 + k;
      } else {
        // Unary part first, then the rest as a second code.
        const large = quotient >= largestQuotient;
        const zeros = large ? largestQuotient : quotient;
        acc |= (1 << zeros) << filled;
        filled += zeros + 1;
        if (filled >= 32) {
          words[word] = acc;
          word += 1;
          filled -= 32;
          acc = filled === 0 ? 0 : (1 << zeros) >>> (zeros + 1 - filled);
        }
        bits = large ? value : value & mask;
        size = large ? 32 : k;
      }
      acc |= bits << filled;
      const total = filled + size;
      if (total >= 32) {
        words[word] = acc;
        word += 1;
        acc = filled === 0 ? 0 : bits >>> (32 - filled);
        filled = total - 32;
        if (filled === 0) acc = 0;
      } else filled = total;
    }
  }
  if (filled > 0) {
    words[word] = acc;
    word += 1;
  }
  if (!littleEndian) swapWords(words, word);
  return new Uint8Array(words.buffer, 0, word * 4);
}

let readScratch = new Uint32Array(0);

/**
 * @param out at least `count` long, written in place
 * @throws RangeError when the bytes end before `count` values do, or hold a code that nothing writes
 */
export function riceDecode(bytes: Uint8Array, count: number, out: Int32Array): void {
  const length = bytes.length >>> 2;
  // Words of zeros behind the end: a window may look over it.
  if (readScratch.length < length + 3) readScratch = new Uint32Array(length + 3);
  const words = readScratch;
  new Uint8Array(words.buffer).set(bytes.subarray(0, length * 4));
  words.fill(0, length, length + 3);
  if (!littleEndian) swapWords(words, length);
  const end = length * 32;
  let at = 0;
  for (let from = 0; from < count; from += blockSize) {
    if (at >= end) throw new RangeError('codes end before their values');
    const to = from + blockSize < count ? from + blockSize : count;
    const k = window(words, at) & 31;
    at += 5;
    if (k === allZero) {
      out.fill(0, from, to);
      continue;
    }
    const mask = (1 << k) - 1;
    for (let i = from; i < to; i += 1) {
      const word = at >>> 5;
      const bit = at & 31;
      const bits = ((words[word] as number) >>> bit) | (((words[word + 1] as number) << 1) << (31 - bit));
      // -1 when no bit is set at all, which the unsigned comparison turns into a large number.
      const zeros = 31 - Math.clz32(bits & -bits);
      if (zeros >>> 0 < largestQuotient && zeros + k < 32) {
        out[i] = (zeros << k) | ((bits >>> (zeros + 1)) & mask);
        at += zeros + 1 + k;
        continue;
      }
      if (zeros < 0 || zeros > largestQuotient || at >= end) throw new RangeError('a code that nothing writes');
      at += zeros + 1;
      const rest = window(words, at);
      const large = zeros === largestQuotient;
      out[i] = large ? rest : (zeros << k) | (rest & mask);
      at += large ? 32 : k;
    }
    if (at > end) throw new RangeError('codes end before their values');
  }
}

function window(words: Uint32Array, at: number): number {
  const word = at >>> 5;
  const bit = at & 31;
  return ((words[word] as number) >>> bit) | (((words[word + 1] as number) << 1) << (31 - bit));
}

/** The parameter with the shortest codes, or very nearly: twice the mean times ln 2, down to a power of two. */
function parameter(values: Int32Array, from: number, to: number): number {
  let sum = 0;
  for (let i = from; i < to; i += 1) sum += (values[i] as number) >>> 0;
  if (sum === 0) return allZero;
  const typical = (sum / (to - from)) * Math.LN2;
  return typical < 1 ? 0 : Math.min(30, 32 - Math.clz32(typical));
}

const littleEndian = new Uint8Array(Uint32Array.of(1).buffer)[0] === 1;

function swapWords(words: Uint32Array, count: number): void {
  for (let i = 0; i < count; i += 1) {
    const w = words[i] as number;
    words[i] = ((w & 0xff) << 24) | ((w & 0xff00) << 8) | ((w >>> 8) & 0xff00) | (w >>> 24);
  }
}

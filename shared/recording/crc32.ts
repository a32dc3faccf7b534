/** CRC-32 as in ISO 3309 and RFC 1952 (polynomial 0xEDB88320, reflected), four bytes a step (Sarwate 1988; slicing as Intel described it in 2005). */
const tables = makeTables();

function makeTables(): Uint32Array {
  const t = new Uint32Array(4 * 256);
  for (let n = 0; n < 256; n += 1) {
    let c = n;
    for (let k = 0; k < 8; k += 1) c = c & 1 ? (c >>> 1) ^ 0xedb88320 : c >>> 1;
    t[n] = c;
  }
  for (let n = 0; n < 256; n += 1) {
    for (let s = 1; s < 4; s += 1) {
      const before = t[(s - 1) * 256 + n] as number;
      t[s * 256 + n] = (before >>> 8) ^ (t[before & 0xff] as number);
    }
  }
  return t;
}

/** @example crc32(ascii('123456789')) === 0xcbf43926, the check value of the polynomial */
export function crc32(bytes: Uint8Array, start = 0, end = bytes.length): number {
  const t = tables;
  let c = 0xffffffff;
  let i = start;
  for (; i + 4 <= end; i += 4) {
    c ^= (bytes[i] as number) | ((bytes[i + 1] as number) << 8) | ((bytes[i + 2] as number) << 16) | ((bytes[i + 3] as number) << 24);
    c = (t[768 + (c & 0xff)] as number) ^ (t[512 + ((c >>> 8) & 0xff)] as number) ^ (t[256 + ((c >>> 16) & 0xff)] as number) ^ (t[c >>> 24] as number);
  }
  for (; i < end; i += 1) c = (t[(c ^ (bytes[i] as number)) & 0xff] as number) ^ (c >>> 8);
  return (c ^ 0xffffffff) >>> 0;
}

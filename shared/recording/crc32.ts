/** CRC-32 as in ISO 3309 and RFC 1952 (polynomial 0xEDB88320, reflected), by tables for eight bytes a step (slicing-by-8, from memory). */
const slices = makeSlices();

function makeSlices(): Int32Array[] {
  const first = Int32Array.from({ length: 256 }, (_, n) => {
    let c = n;
    for (let k = 0; k < 8; k += 1) c = c & 1 ? (c >>> 1) ^ 0xedb88320 : c >>> 1;
    return c;
  });
  const tables = [first];
  for (let s = 1; s < 8; s += 1) {
    const before = tables[s - 1] as Int32Array;
    tables.push(before.map((c) => (c >>> 8) ^ (first[c & 0xff] as number)));
  }
  return tables;
}

/** @example crc32(ascii('123456789')) === 0xcbf43926, the check value of the polynomial */
export function crc32(bytes: Uint8Array, start = 0, end = bytes.length): number {
  const [t0, t1, t2, t3, t4, t5, t6, t7] = slices as [Int32Array, Int32Array, Int32Array, Int32Array, Int32Array, Int32Array, Int32Array, Int32Array];
  let c = -1;
  let i = start;
  for (; i + 8 <= end; i += 8) {
    const low = c ^ ((bytes[i] as number) | ((bytes[i + 1] as number) << 8) | ((bytes[i + 2] as number) << 16) | ((bytes[i + 3] as number) << 24));
    c =
      (t7[low & 0xff] as number) ^ (t6[(low >>> 8) & 0xff] as number) ^ (t5[(low >>> 16) & 0xff] as number) ^ (t4[low >>> 24] as number) ^
      (t3[bytes[i + 4] as number] as number) ^ (t2[bytes[i + 5] as number] as number) ^ (t1[bytes[i + 6] as number] as number) ^ (t0[bytes[i + 7] as number] as number);
  }
  for (; i < end; i += 1) c = (c >>> 8) ^ (t0[(c ^ (bytes[i] as number)) & 0xff] as number);
  return (c ^ -1) >>> 0;
}

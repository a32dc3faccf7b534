/**
 * Blocks of little-endian numbers inside frames.
 *
 * A block in a frame starts at any byte, so it cannot be looked at as floats in place: it is copied into aligned memory
 * first, once. Every machine that runs Tautbook is little-endian; one that is not is served by the slow way.
 */

const littleEndian = new Uint8Array(new Uint32Array([1]).buffer)[0] === 1;

/** Bytes of float32 values, little-endian. */
export const float32Block = (values: Float32Array): Uint8Array => block(values, 4);
/** Bytes of uint32 values, little-endian. */
export const uint32Block = (values: Uint32Array): Uint8Array => block(values, 4);
/** Bytes of float64 values, little-endian. */
export const float64Block = (values: Float64Array): Uint8Array => block(values, 8);

export const float32sOf = (bytes: Uint8Array): Float32Array => new Float32Array(aligned(bytes, 4));
export const uint32sOf = (bytes: Uint8Array): Uint32Array => new Uint32Array(aligned(bytes, 4));
export const float64sOf = (bytes: Uint8Array): Float64Array => new Float64Array(aligned(bytes, 8));

function block(values: Float32Array | Uint32Array | Float64Array, size: number): Uint8Array {
  const bytes = new Uint8Array(values.buffer, values.byteOffset, values.byteLength);
  return littleEndian ? bytes : swapped(bytes, size);
}

function aligned(bytes: Uint8Array, size: number): ArrayBuffer {
  const whole = bytes.subarray(0, bytes.length - (bytes.length % size));
  return (littleEndian ? Uint8Array.from(whole) : swapped(whole, size)).buffer as ArrayBuffer;
}

function swapped(bytes: Uint8Array, size: number): Uint8Array {
  const out = Uint8Array.from(bytes);
  for (let at = 0; at < out.length; at += size) out.subarray(at, at + size).reverse();
  return out;
}

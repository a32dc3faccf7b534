/**
 * The DEFLATE functions (RFC 1951) that the chunk codec is given. The default is fflate, which runs in browsers and
 * on the server alike; a server passes its native ones, which also know the Huffman-only strategy.
 */
import { deflateSync, inflateSync } from 'fflate';

/** `huffman`: no search for repeats, entropy coding only. `match`: repeats searched at the fastest level. */
export type Deflate = (bytes: Uint8Array, how: 'huffman' | 'match') => Uint8Array;
/** @param size the number of bytes that must come out */
export type Inflate = (bytes: Uint8Array, size: number) => Uint8Array;

export const fflateDeflate: Deflate = (bytes) => deflateSync(bytes, { level: 1, mem: 4 });
export const fflateInflate: Inflate = (bytes, size) => inflateSync(bytes, { out: new Uint8Array(size) });

/** The chunk codec's compression at the server's own speed; bytes are the same format that browsers read. */
import { constants, deflateRawSync, inflateRawSync } from 'node:zlib';
import { type Chunk, decodeChunk, decodePyramidBlock, type Deflate, encodeChunk, encodePyramidBlock, type Inflate, type PyramidBlock } from '@shared/recording';

const deflate: Deflate = (bytes, how) =>
  how === 'huffman' ? deflateRawSync(bytes, { strategy: constants.Z_HUFFMAN_ONLY, memLevel: 5 }) : deflateRawSync(bytes, { level: 1 });
const inflate: Inflate = (bytes, size) => inflateRawSync(bytes, { maxOutputLength: Math.max(size, 1) });

export const packChunk = (chunk: Chunk): Uint8Array => encodeChunk(chunk, deflate);
export const unpackChunk = (bytes: Uint8Array): Chunk => decodeChunk(bytes, inflate);
export const packBlock = (block: PyramidBlock): Uint8Array => encodePyramidBlock(block, deflate);
export const unpackBlock = (bytes: Uint8Array): PyramidBlock => decodePyramidBlock(bytes, inflate);

/** Why stored bytes are not a chunk. */
export type ChunkErrorCode =
  | 'CHUNK_SHAPE' // what was to be encoded has columns of unequal length, or too many
  | 'CHUNK_MAGIC' // not a chunk at all
  | 'CHUNK_VERSION' // written by a newer version
  | 'CHUNK_SHORT' // fewer bytes than the header promises
  | 'CHUNK_CHECKSUM' // bytes changed since they were written
  | 'CHUNK_CONTENT'; // checksum holds, but the content contradicts itself

export class ChunkError extends Error {
  constructor(readonly code: ChunkErrorCode, message: string) {
    super(message);
    this.name = 'ChunkError';
  }
}

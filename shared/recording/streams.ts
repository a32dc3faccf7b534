/** The three byte streams of a chunk: as it is, entropy-coded, searched for repeats. */
import { ByteReader, ByteWriter } from './bytes';
import type { Deflate, Inflate } from './deflate';

/** How a byte plane is kept; the number is what stands in the chunk. */
export const planeWay = { none: 0, stored: 1, huffman: 2, match: 3 } as const;
export type PlaneWay = (typeof planeWay)[keyof typeof planeWay];

export class StreamWriters {
  private readonly writers: readonly [ByteWriter, ByteWriter, ByteWriter];

  constructor(capacity: number) {
    this.writers = [new ByteWriter(capacity / 4), new ByteWriter(capacity / 2), new ByteWriter(capacity / 4)];
  }

  of(way: Exclude<PlaneWay, 0>): ByteWriter {
    return this.writers[way - 1] as ByteWriter;
  }

  get rawLength(): number {
    return this.writers[0].length + this.writers[1].length + this.writers[2].length;
  }

  finish(out: ByteWriter, deflate: Deflate): void {
    const [stored, huffman, match] = this.writers;
    out.u32(stored.length);
    out.bytes(stored.view());
    for (const [writer, how] of [[huffman, 'huffman'], [match, 'match']] as const) {
      const packed = writer.length === 0 ? new Uint8Array(0) : deflate(writer.view(), how);
      out.u32(writer.length);
      out.u32(packed.length);
      out.bytes(packed);
    }
  }
}

export class StreamReaders {
  private readonly readers: readonly ByteReader[];

  /** @param limit no stream may claim to unpack to more than this */
  constructor(source: ByteReader, inflate: Inflate, limit: number) {
    const readers = [new ByteReader(source.bytes(source.u32()), 0)];
    for (let i = 0; i < 2; i += 1) {
      const size = source.u32();
      const packed = source.bytes(source.u32());
      if (size > limit) throw new RangeError(`a stream of ${size} bytes in a chunk that can hold ${limit}`);
      const bytes = size === 0 ? packed : inflate(packed, size);
      if (bytes.length !== size) throw new RangeError(`a stream of ${bytes.length} bytes where ${size} were written`);
      readers.push(new ByteReader(bytes, 0));
    }
    if (source.left() !== 0) throw new RangeError(`${source.left()} bytes behind the chunk's end`);
    this.readers = readers;
  }

  take(way: Exclude<PlaneWay, 0>, size: number): Uint8Array {
    return (this.readers[way - 1] as ByteReader).bytes(size);
  }
}

/** Little-endian bytes with a cursor: a writer that grows and a reader that refuses to run over its end. */

export class ByteWriter {
  private buffer: Uint8Array;
  private data: DataView;
  length = 0;

  constructor(capacity: number) {
    this.buffer = new Uint8Array(Math.max(16, capacity));
    this.data = new DataView(this.buffer.buffer);
  }

  u8(value: number): void { this.room(1); this.data.setUint8(this.length, value); this.length += 1; }
  u16(value: number): void { this.room(2); this.data.setUint16(this.length, value, true); this.length += 2; }
  u32(value: number): void { this.room(4); this.data.setUint32(this.length, value, true); this.length += 4; }
  i32(value: number): void { this.room(4); this.data.setInt32(this.length, value, true); this.length += 4; }
  f64(value: number): void { this.room(8); this.data.setFloat64(this.length, value, true); this.length += 8; }
  bytes(part: Uint8Array): void { this.room(part.length); this.buffer.set(part, this.length); this.length += part.length; }
  patchU32(at: number, value: number): void { this.data.setUint32(at, value, true); }

  /** Reserves `size` bytes and returns where they start; `target()` is the memory to write them to. */
  reserve(size: number): number {
    this.room(size);
    const at = this.length;
    this.length += size;
    return at;
  }
  target(): Uint8Array { return this.buffer; }

  view(): Uint8Array { return this.buffer.subarray(0, this.length); }
  /** A copy of exactly what was written. */
  take(): Uint8Array { return this.buffer.slice(0, this.length); }

  private room(size: number): void {
    if (this.length + size <= this.buffer.length) return;
    const larger = new Uint8Array(Math.max(this.buffer.length * 2, this.length + size));
    larger.set(this.view());
    this.buffer = larger;
    this.data = new DataView(larger.buffer);
  }
}

export class ByteReader {
  private readonly data: DataView;

  constructor(private readonly source: Uint8Array, private at: number) {
    this.data = new DataView(source.buffer, source.byteOffset, source.byteLength);
  }

  u8(): number { return this.data.getUint8(this.step(1)); }
  u16(): number { return this.data.getUint16(this.step(2), true); }
  u32(): number { return this.data.getUint32(this.step(4), true); }
  i32(): number { return this.data.getInt32(this.step(4), true); }
  f64(): number { return this.data.getFloat64(this.step(8), true); }
  /** A view, not a copy. */
  bytes(size: number): Uint8Array { const at = this.step(size); return this.source.subarray(at, at + size); }
  left(): number { return this.source.length - this.at; }

  private step(size: number): number {
    const at = this.at;
    if (at + size > this.source.length) throw new RangeError(`${size} bytes wanted at ${at}, ${this.source.length - at} are there`);
    this.at = at + size;
    return at;
  }
}

import type { Chunk } from '@shared/recording';

/** A chunk that is being filled, one value after another. */
export class OpenChunk {
  count = 0;
  readonly #timesUs: Float64Array;
  readonly #columns: Float32Array[];
  #channel = 0;

  constructor(size: number, channels: number, private readonly first: number) {
    this.#timesUs = new Float64Array(size);
    this.#columns = Array.from({ length: channels }, () => new Float32Array(size));
  }

  begin(timeUs: number): void {
    this.#timesUs[this.count] = timeUs;
    this.#channel = 0;
    this.count += 1;
  }

  put(value: number): void {
    (this.#columns[this.#channel] as Float32Array)[this.count - 1] = value;
    this.#channel += 1;
  }

  close(): Chunk {
    const { count } = this;
    return { first: this.first, count, timesUs: this.#timesUs.slice(0, count), columns: this.#columns.map((column) => column.slice(0, count)) };
  }
}

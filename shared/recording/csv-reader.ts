/**
 * Reads a recording file piece by piece into chunks, in bounded memory, and says of everything wrong where it is.
 *
 * A final newline may be missing, lines may end in CR LF, a UTF-8 mark at the start is passed over. The first twenty
 * faults are listed; from the first on no chunk is handed out any more, and the caller must drop those it already has.
 */
import { channelNames, type ChannelName } from './channels';
import type { Chunk } from './chunk';
import { quoted, type CsvFault } from './csv-fault';
import { FieldKind, FieldScanner, fieldText } from './csv-number';

export type CsvReaderOptions = {
  /** Cables of the rig; when left out, as many as the header names. */
  cableCount?: number;
  /** Samples a chunk; 1000 by default. */
  chunkSamples?: number;
};

export type CsvReader = {
  /** Text, or bytes of UTF-8, cut anywhere. Returns the chunks that became full. */
  push(piece: string | Uint8Array): Chunk[];
  /** The file is over: the last, shorter chunk. */
  finish(): Chunk[];
  /** The first twenty faults; empty while all is well. */
  readonly faults: readonly CsvFault[];
  /** Channels in the order of the chunks' columns; empty before the header was read. */
  readonly channels: readonly ChannelName[];
  /** Most decimals seen so far in the time column and in each channel: what prints the same digits again. */
  readonly decimals: { readonly time: number; readonly channels: readonly number[] };
  readonly samples: number;
};

const mostFaults = 20;
const longestLine = 1 << 20;
const comma = 44;
const newline = 10;
const carriageReturn = 13;
const largestFloat = 3.4028235677973366e38;

export function createCsvReader(options: CsvReaderOptions = {}): CsvReader {
  return new Reader(options);
}

class Reader implements CsvReader {
  readonly faults: CsvFault[] = [];
  channels: ChannelName[] = [];
  private tail: Uint8Array = new Uint8Array(0);
  private line = 0;
  private readonly scanner = new FieldScanner();
  private readonly chunkSamples: number;
  private filling: Chunk | null = null;
  private lastUs = Number.NEGATIVE_INFINITY;
  private timeDecimals = 0;
  private channelDecimals = new Uint8Array(0);
  samples = 0;

  constructor(private readonly options: CsvReaderOptions) {
    this.chunkSamples = options.chunkSamples ?? 1000;
  }

  get decimals() {
    return { time: this.timeDecimals, channels: [...this.channelDecimals] };
  }

  push(piece: string | Uint8Array): Chunk[] {
    const bytes = joined(this.tail, typeof piece === 'string' ? new TextEncoder().encode(piece) : piece);
    const end = bytes.lastIndexOf(newline) + 1;
    const chunks = this.readLines(bytes, end);
    this.tail = bytes.slice(end);
    if (this.tail.length > longestLine) this.fault({ code: 'CSV_LINE', line: this.line + 1, column: 1, found: `a line of more than ${longestLine} bytes`, expected: 'a row of numbers' });
    return chunks;
  }

  finish(): Chunk[] {
    const chunks = this.tail.length > 0 ? this.push('\n') : [];
    if (this.line === 0) this.fault({ code: 'CSV_EMPTY', line: 1, column: 1, found: 'nothing', expected: 'a header that starts with t_s' });
    else if (this.samples === 0 && this.faults.length === 0) this.fault({ code: 'CSV_EMPTY', line: 2, column: 1, found: 'nothing', expected: 'at least one row below the header' });
    const last = this.filling;
    this.filling = null;
    if (last && last.count > 0 && this.faults.length === 0) chunks.push(cut(last));
    return chunks;
  }

  private readLines(bytes: Uint8Array, end: number): Chunk[] {
    const chunks: Chunk[] = [];
    let at = 0;
    while (at < end && this.faults.length < mostFaults) {
      this.line += 1;
      if (this.line === 1) at = this.readHeader(bytes, at);
      else if (this.channels.length === 0) break;
      else at = this.readRow(bytes, at, chunks);
    }
    return this.faults.length === 0 ? chunks : [];
  }

  private readHeader(bytes: Uint8Array, from: number): number {
    const marked = bytes[from] === 0xef && bytes[from + 1] === 0xbb && bytes[from + 2] === 0xbf;
    const end = bytes.indexOf(newline, from);
    const text = fieldText(bytes, from + (marked ? 3 : 0), end).replace(/\r$/, '');
    const found = text.split(',');
    const expected = ['t_s', ...channelNames(this.options.cableCount ?? cablesNamed(found))];
    const seen = new Set<string>();
    expected.forEach((name, i) => {
      if (found[i] !== name) this.fault({ code: 'CSV_HEADER', line: 1, column: i + 1, found: quoted(found[i] ?? ''), expected: name });
    });
    found.forEach((name, i) => {
      if (i >= expected.length && !/^[A-Za-z][A-Za-z0-9]*(_[A-Za-z0-9%/^-]+)+$/.test(name)) {
        this.fault({ code: 'CSV_HEADER', line: 1, column: i + 1, found: quoted(name), expected: 'a further column named name_unit' });
      } else if (i >= expected.length && (/^(t\d+_N|l\d+_m)$/.test(name) || seen.has(name) || expected.includes(name))) {
        this.fault({ code: 'CSV_HEADER', line: 1, column: i + 1, found: quoted(name), expected: 'a name that is not a cable of another rig and not named twice' });
      }
      seen.add(name);
    });
    if (this.faults.length === 0) {
      this.channels = found.slice(1);
      this.channelDecimals = new Uint8Array(this.channels.length);
    }
    return end + 1;
  }

  private readRow(bytes: Uint8Array, from: number, chunks: Chunk[]): number {
    const { scanner, channels } = this;
    const chunk = (this.filling ??= this.emptyChunk());
    const row = chunk.count;
    const faultsBefore = this.faults.length;
    scanner.scan(bytes, from);
    const timeUs = scanner.millionfold;
    if (scanner.kind !== FieldKind.number) this.faultAt(bytes, from, 1, 'CSV_TIME', 'a time in seconds');
    else if (!(timeUs > this.lastUs)) this.faultAt(bytes, from, 1, 'CSV_TIME', `a time above ${this.lastUs / 1e6} s, that of the row before`);
    else {
      this.lastUs = timeUs;
      chunk.timesUs[row] = timeUs;
      if (scanner.decimals > this.timeDecimals) this.timeDecimals = scanner.decimals;
    }
    let at = scanner.end;
    let field = 0;
    while (field < channels.length && bytes[at] === comma) {
      at += 1;
      scanner.scan(bytes, at);
      const column = chunk.columns[field] as Float32Array;
      if (scanner.kind === FieldKind.number) {
        const { value } = scanner;
        if (value >= largestFloat || value <= -largestFloat) this.faultAt(bytes, at, field + 2, 'CSV_INFINITE', 'a finite number that float32 holds');
        column[row] = value;
        if (scanner.decimals > (this.channelDecimals[field] as number)) this.channelDecimals[field] = Math.min(255, scanner.decimals);
      } else {
        if (scanner.kind === FieldKind.bad) this.faultAt(bytes, at, field + 2, 'CSV_NUMBER', 'a number, nothing, or nan');
        column[row] = Number.NaN;
      }
      at = scanner.end;
      field += 1;
    }
    const atEnd = bytes[at] === newline || (bytes[at] === carriageReturn && bytes[at + 1] === newline);
    const lineEnd = atEnd ? at : bytes.indexOf(newline, at);
    // A row that already has a fault is not told off for its count as well.
    if ((field < channels.length || !atEnd) && this.faults.length === faultsBefore) {
      const found = field + 1 + (atEnd ? 0 : fieldText(bytes, at, lineEnd).split(',').length - 1);
      this.fault({ code: 'CSV_FIELDS', line: this.line, column: Math.min(found, channels.length + 1) + 1, found: `${found} fields`, expected: `${channels.length + 1} fields` });
    }
    if (this.faults.length === faultsBefore) {
      chunk.count += 1;
      this.samples += 1;
      if (chunk.count === this.chunkSamples) {
        chunks.push(chunk);
        this.filling = null;
      }
    }
    return bytes[lineEnd] === newline ? lineEnd + 1 : lineEnd + 2;
  }

  private emptyChunk(): Chunk {
    const size = this.chunkSamples;
    return { first: this.samples, count: 0, timesUs: new Float64Array(size), columns: this.channels.map(() => new Float32Array(size)) };
  }

  private faultAt(bytes: Uint8Array, at: number, column: number, code: CsvFault['code'], expected: string): void {
    this.fault({ code, line: this.line, column, found: quoted(fieldText(bytes, at, this.scanner.end)), expected });
  }

  private fault(fault: CsvFault): void {
    if (this.faults.length < mostFaults) this.faults.push(fault);
  }
}

/** Cables that a header speaks of: the most tensions or lengths it names in a row. */
function cablesNamed(names: readonly string[]): number {
  const numbers = names.map((name) => Number(/^[tl](\d{1,3})_[Nm]$/.exec(name)?.[1] ?? 0));
  return Math.max(8, ...numbers);
}

function joined(head: Uint8Array, rest: Uint8Array): Uint8Array {
  if (head.length === 0) return rest;
  const out = new Uint8Array(head.length + rest.length);
  out.set(head);
  out.set(rest, head.length);
  return out;
}

function cut(chunk: Chunk): Chunk {
  const { first, count } = chunk;
  if (chunk.timesUs.length === count) return chunk;
  return { first, count, timesUs: chunk.timesUs.slice(0, count), columns: chunk.columns.map((column) => column.slice(0, count)) };
}

/**
 * Decimal numbers straight from bytes. Up to 15 digits are gathered as a whole number and divided once by a power of
 * ten, both exact, so the result is the correctly rounded one; anything longer or with an exponent goes through `Number`.
 */
export const powersOfTen = Float64Array.from({ length: 23 }, (_, n) => 10 ** n);

const comma = 44;
const newline = 10;
const carriageReturn = 13;
const minus = 45;
const plus = 43;
const dot = 46;
const mostDigits = 15;

export const enum FieldKind { number, missing, bad }

export class FieldScanner {
  kind: FieldKind = FieldKind.missing;
  value = 0;
  /** The same value times 10^6, each rounded once: seconds as µs. */
  millionfold = 0;
  decimals = 0;
  /** Just behind the field: at a comma or at the line's end. */
  end = 0;

  /** Scans the field that starts at `at`; the bytes must hold a newline somewhere behind it. */
  scan(bytes: Uint8Array, at: number): void {
    let i = at;
    let byte = bytes[i] as number;
    const negative = byte === minus;
    if (negative || byte === plus) byte = bytes[(i += 1)] as number;
    let whole = 0;
    let digits = 0;
    let decimals = 0;
    const first = i;
    while (byte >= 48 && byte <= 57) {
      whole = whole * 10 + byte - 48;
      byte = bytes[(i += 1)] as number;
    }
    digits = i - first;
    if (byte === dot) {
      const point = i;
      byte = bytes[(i += 1)] as number;
      while (byte >= 48 && byte <= 57) {
        whole = whole * 10 + byte - 48;
        byte = bytes[(i += 1)] as number;
      }
      decimals = i - point - 1;
      digits += decimals;
    }
    const ended = byte === comma || byte === newline || byte === carriageReturn;
    if (ended && digits > 0 && digits <= mostDigits) {
      this.kind = FieldKind.number;
      const value = whole / (powersOfTen[decimals] as number);
      const micro = decimals <= 6 ? whole * (powersOfTen[6 - decimals] as number) : whole / (powersOfTen[decimals - 6] as number);
      this.value = negative ? -value : value;
      this.millionfold = negative ? -micro : micro;
      this.decimals = decimals;
      this.end = i;
      return;
    }
    this.scanSlowly(bytes, at);
  }

  private scanSlowly(bytes: Uint8Array, at: number): void {
    let end = at;
    while (bytes[end] !== comma && bytes[end] !== newline) end += 1;
    this.end = end > at && bytes[end] === newline && bytes[end - 1] === carriageReturn ? end - 1 : end;
    const text = fieldText(bytes, at, this.end);
    if (text === '' || /^nan$/i.test(text)) {
      this.kind = FieldKind.missing;
      return;
    }
    const parts = /^[+-]?(?:\d+\.?(\d*)|\.(\d+))(?:[eE]([+-]?\d{1,4}))?$/.exec(text);
    if (!parts) {
      this.kind = FieldKind.bad;
      return;
    }
    this.kind = FieldKind.number;
    this.value = Number(text);
    const [mantissa, exponent = '0'] = text.split(/e/i);
    this.millionfold = Number(`${mantissa}e${Number(exponent) + 6}`);
    this.decimals = Math.max(0, (parts[1] ?? parts[2] ?? '').length - Number(parts[3] ?? 0));
  }
}

export function fieldText(bytes: Uint8Array, from: number, to: number): string {
  return new TextDecoder().decode(bytes.subarray(from, to));
}

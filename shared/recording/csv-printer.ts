/** Prints chunks as rows of a recording file. The digits printed read back to the very same float32 and µs. */
import type { ChannelName } from './channels';
import type { Chunk } from './chunk';
import { powersOfTen } from './csv-number';

/** How many decimals to print: those of the file that was imported, which prints its digits again; else the fewest that read back the same. */
export type CsvDecimals = { readonly time: number; readonly channels: readonly number[] };

export type CsvPrinter = { header(): string; rows(chunk: Chunk): string };

export function createCsvPrinter(channels: readonly ChannelName[], decimals?: CsvDecimals): CsvPrinter {
  const printTime = (timeUs: number): string => (decimals ? fixed(timeUs / 1e6, decimals.time, seconds) : seconds(timeUs / 1e6));
  return {
    header: () => `${['t_s', ...channels].join(',')}\n`,
    rows({ count, timesUs, columns }) {
      let text = '';
      for (let i = 0; i < count; i += 1) {
        text += printTime(timesUs[i] as number);
        for (let c = 0; c < columns.length; c += 1) {
          const value = (columns[c] as Float32Array)[i] as number;
          const wanted = decimals?.channels[c];
          text += wanted === undefined ? `,${shortestFloat32(value)}` : `,${fixed(value, wanted, shortestFloat32)}`;
        }
        text += '\n';
      }
      return text;
    },
  };
}

/** With as many decimals as asked for when they read back the same, else as `otherwise` prints it. */
function fixed(value: number, decimals: number, otherwise: (value: number) => string): string {
  if (value !== value) return '';
  const text = decimals <= 20 && Math.abs(value) < 1e15 ? value.toFixed(decimals) : '';
  const signed = Object.is(value, -0) ? `-${text}` : text;
  const same = otherwise === seconds ? Number(text) === Number(seconds(value)) : Math.fround(Number(text)) === Math.fround(value);
  return text !== '' && same ? signed : otherwise(value);
}

/** Seconds that were µs: fifteen digits undo the rounding of that division. */
function seconds(value: number): string {
  return plain(Number(value.toPrecision(15)));
}

/** Fewest decimals that read back as the same float32; nothing for a value that was not measured. */
export function shortestFloat32(value: number): string {
  if (value !== value) return '';
  const size = Math.abs(value);
  for (let d = 0; d <= 12; d += 1) {
    const scale = powersOfTen[d] as number;
    const whole = Math.round(size * scale);
    if (whole > Number.MAX_SAFE_INTEGER) break;
    if (Math.fround(whole / scale) === size) return sign(value) + placed(whole, d);
  }
  for (let digits = 6; digits <= 9; digits += 1) {
    const text = size.toPrecision(digits);
    if (Math.fround(Number(text)) === size) return sign(value) + text;
  }
  return sign(value) + String(size);
}

const sign = (value: number): string => (value < 0 || Object.is(value, -0) ? '-' : '');

function placed(whole: number, decimals: number): string {
  if (decimals === 0) return String(whole);
  const text = String(whole).padStart(decimals + 1, '0');
  return `${text.slice(0, -decimals)}.${text.slice(-decimals)}`;
}

/** Without an exponent where that is short: 0.0000012 rather than 1.2e-6. */
function plain(value: number): string {
  const text = String(value);
  return text.includes('e-') ? value.toFixed(15).replace(/0+$/, '') : text;
}

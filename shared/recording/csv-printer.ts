/** Prints chunks as rows of a recording file. The digits printed read back to the very same float32 and µs. */
import type { ChannelName } from './channels';
import type { Chunk } from './chunk';
import { powersOfTen } from './csv-number';

/** How many decimals to print: those of the file that was imported, which prints its digits again; else the fewest that read back the same. */
export type CsvDecimals = { readonly time: number; readonly channels: readonly number[] };

export type CsvPrinter = { header(): string; rows(chunk: Chunk): string };

export function createCsvPrinter(channels: readonly ChannelName[], decimals?: CsvDecimals): CsvPrinter {
  return {
    header: () => `${['t_s', ...channels].join(',')}\n`,
    rows({ count, timesUs, columns }) {
      let text = '';
      for (let i = 0; i < count; i += 1) {
        text += seconds(timesUs[i] as number, decimals?.time ?? 0);
        for (let c = 0; c < columns.length; c += 1) {
          const value = (columns[c] as Float32Array)[i] as number;
          const wanted = decimals?.channels[c];
          text += wanted === undefined ? `,${shortestFloat32(value)}` : `,${fixed(value, wanted)}`;
        }
        text += '\n';
      }
      return text;
    },
  };
}

/** With as many decimals as asked for when they read back the same, else with the fewest that do. */
function fixed(value: number, decimals: number): string {
  if (value !== value) return '';
  const text = decimals <= 20 && Math.abs(value) < 1e15 ? value.toFixed(decimals) : '';
  if (text === '' || Math.fround(Number(text)) !== Math.fround(value)) return shortestFloat32(value);
  return Object.is(value, -0) ? `-${text}` : text;
}

/** A time in µs as seconds with at least so many decimals: its own digits with the point moved, so that none is rounded away. */
function seconds(timeUs: number, decimals: number): string {
  const text = String(Math.abs(timeUs));
  const [mantissa = '', exponent] = text.split('e');
  if (exponent !== undefined) return `${sign(timeUs)}${mantissa}e${Number(exponent) - 6}`;
  const [whole = '', fraction = ''] = mantissa.split('.');
  const digits = whole.padStart(7, '0');
  const behind = (digits.slice(-6) + fraction).replace(/0+$/, '').padEnd(decimals, '0');
  return sign(timeUs) + digits.slice(0, -6) + (behind === '' ? '' : `.${behind}`);
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

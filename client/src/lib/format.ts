/**
 * Numbers, units and times as a reader meets them. Inside everything is SI; degrees, mm and % begin here.
 *
 * Two clocks exist and are never mixed silently: the recording's own (seconds since the trial's start, on the rig) and
 * wall time (the server's, shown in the reader's time zone).
 */
const MINUS = '\u2212';
const THIN = '\u202f';
/** Between a number and its unit: the two never part at the end of a line. */
const UNBROKEN = '\u00a0';

/** A number with a fixed count of decimals and a true minus sign; "not measured" when it is not finite. */
export function fixed(value: number, decimals: number): string {
  if (!Number.isFinite(value)) return 'not measured';
  const text = Math.abs(value).toFixed(decimals);
  return value < 0 && Number(text) !== 0 ? MINUS + text : text;
}

const withUnit = (value: number, decimals: number, unit: string) => (Number.isFinite(value) ? fixed(value, decimals) + UNBROKEN + unit : 'not measured');

export const newtons = (valueN: number): string => withUnit(valueN, Math.abs(valueN) < 10 ? 2 : 1, 'N');
/** @param valueM metres */
export const millimetres = (valueM: number, decimals = Math.abs(valueM) < 0.01 ? 2 : 0): string => withUnit(valueM * 1000, decimals, 'mm');
/** @param valueRad radians */
export const degrees = (valueRad: number, decimals = 1): string => (Number.isFinite(valueRad) ? `${fixed((valueRad * 180) / Math.PI, decimals)}°` : 'not measured');
export const metresPerSecond = (value: number): string => withUnit(value, 2, 'm/s');
/** @param share 0 to 1 */
export const percent = (share: number, decimals = 0): string => withUnit(share * 100, decimals, '%');

/**
 * A place on the recording's clock as m:ss.mmm.
 * @param decimals 0 to 3; the value is cut, not rounded, so that a place never shows a moment that has not come yet
 */
export function clock(seconds: number, decimals: 0 | 1 | 2 | 3 = 3): string {
  if (!Number.isFinite(seconds)) return '–:––';
  const scale = 10 ** decimals;
  // A hair above, because 0.3 s times 10 is 2.9999… in binary.
  const ticks = Math.floor(Math.abs(seconds) * scale + 1e-6);
  const whole = Math.floor(ticks / scale);
  const minutes = Math.floor(whole / 60);
  const head = `${seconds < 0 ? MINUS : ''}${minutes}:${String(whole % 60).padStart(2, '0')}`;
  return decimals === 0 ? head : `${head}.${String(ticks % scale).padStart(decimals, '0')}`;
}

/** A span on the recording's clock. */
export const clockSpan = (startS: number, endS: number, decimals: 0 | 1 | 2 | 3 = 1): string => `${clock(startS, decimals)}–${clock(endS, decimals)}`;

/** A length of time: 0.33 s, 58.0 s, 4 min 12 s, 1 h 02 min. */
export function duration(seconds: number): string {
  if (!Number.isFinite(seconds)) return 'not measured';
  if (seconds < 60) return withUnit(seconds, seconds < 10 ? 2 : 1, 's');
  const whole = Math.round(seconds);
  const pair = (large: number, largeUnit: string, small: number, smallUnit: string) => [large, largeUnit, String(small).padStart(2, '0'), smallUnit].join(UNBROKEN);
  if (whole < 3600) return pair(Math.floor(whole / 60), 'min', whole % 60, 's');
  const minutes = Math.round(whole / 60);
  return pair(Math.floor(minutes / 60), 'h', minutes % 60, 'min');
}

/** An offset or uncertainty of a clock: µs below 1 ms, ms below 10 s, else s. */
export function microseconds(valueUs: number): string {
  const size = Math.abs(valueUs);
  if (size < 1000) return withUnit(valueUs, 0, 'µs');
  if (size < 1e7) return withUnit(valueUs / 1000, size < 1e4 ? 2 : 0, 'ms');
  return withUnit(valueUs / 1e6, 1, 's');
}

/** 1 234 567 with thin spaces. */
export const count = (value: number): string => String(Math.round(value)).replace(/\B(?=(\d{3})+(?!\d))/g, THIN);

/** "1 trial", "3 trials". */
export const counted = (value: number, one: string, many = `${one}s`): string => `${count(value)} ${value === 1 ? one : many}`;

const day = new Intl.DateTimeFormat('en-GB', { day: 'numeric', month: 'short' });
const dayAndYear = new Intl.DateTimeFormat('en-GB', { day: 'numeric', month: 'short', year: 'numeric' });
const hour = new Intl.DateTimeFormat('en-GB', { hour: '2-digit', minute: '2-digit' });
const hourToSecond = new Intl.DateTimeFormat('en-GB', { hour: '2-digit', minute: '2-digit', second: '2-digit' });

/** Wall time as a day, with the year when it is not this one's. */
export function wallDay(iso: string, now = new Date()): string {
  const at = new Date(iso);
  return (at.getFullYear() === now.getFullYear() ? day : dayAndYear).format(at);
}

/** Wall time as day and hour: "14 May, 09:30"; "today, 09:30" on the day itself. */
export function wallTime(iso: string, now = new Date()): string {
  const at = new Date(iso);
  const head = at.toDateString() === now.toDateString() ? 'today' : wallDay(iso, now);
  return `${head}, ${hour.format(at)}`;
}

/** Wall time to the second with the year, for logs. */
export const wallTimeToSecond = (iso: string): string => `${dayAndYear.format(new Date(iso))}, ${hourToSecond.format(new Date(iso))}`;

const ORDINALS = ['first', 'second', 'third', 'fourth', 'fifth', 'sixth', 'seventh', 'eighth', 'ninth', 'tenth'];
/** "third visit", "visit 12". */
export const visitWords = (visit: number): string => (ORDINALS[visit - 1] === undefined ? `visit ${visit}` : `${ORDINALS[visit - 1]} visit`);

/** What is wrong in a recording file, and where. */
export type CsvFaultCode =
  | 'CSV_EMPTY' // no header, or no sample below it
  | 'CSV_HEADER' // a column name that does not belong there
  | 'CSV_FIELDS' // a row with too few or too many fields
  | 'CSV_NUMBER' // a field that is no number
  | 'CSV_INFINITE' // a number that float32 cannot hold
  | 'CSV_TIME' // a time that is missing or does not rise
  | 'CSV_LINE'; // a line so long that this cannot be a recording

export type CsvFault = {
  readonly code: CsvFaultCode;
  /** From 1; the header is line 1. */
  readonly line: number;
  /** Field of the line, from 1. */
  readonly column: number;
  readonly found: string;
  readonly expected: string;
};

export function describeCsvFault({ code, line, column, found, expected }: CsvFault): string {
  return `line ${line}, column ${column}: found ${found}, expected ${expected} (${code})`;
}

/** A found text, quoted and short enough for one line. */
export function quoted(text: string): string {
  const shown = text.length > 40 ? `${text.slice(0, 37)}...` : text;
  return text === '' ? 'nothing' : JSON.stringify(shown);
}

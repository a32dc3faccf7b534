/** The input is at fault, not the program: lines for standard error, exit status 2. */
export class InputFault extends Error {
  constructor(readonly lines: readonly string[]) {
    super(lines[0]);
    this.name = 'InputFault';
  }
}

const reasons: Record<string, string> = {
  ENOENT: 'there is no such file',
  EACCES: 'it may not be read by this user',
  EISDIR: 'it is a directory',
  Z_DATA_ERROR: 'it is named .gz and is not gzip, or it is damaged',
  Z_BUF_ERROR: 'the gzip file ends before its content does',
};

/** Turns what the file system and zlib throw about a file into an input fault; hands anything else back. */
export function asInputFault(error: unknown, path: string): unknown {
  const code = error instanceof Error && 'code' in error ? String(error.code) : '';
  const reason = reasons[code];
  return reason === undefined ? error : new InputFault([`${path}: ${reason} (${code}).`]);
}

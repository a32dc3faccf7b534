/** Parameters of bytea travel in binary, results are decoded at native speed: PGlite's own way is hex made in JavaScript. */
import type { PGliteOptions } from '@electric-sql/pglite';

const BYTEA = 17;

/** Memory of its own, not a piece of Node's pool: it may be handed to another thread. */
function bytesOf(text: string): Uint8Array {
  const bytes = Buffer.allocUnsafeSlow((text.length - 2) / 2);
  bytes.write(text.slice(2), 'hex');
  return bytes;
}

export const binaryBytes = {
  serializers: { [BYTEA]: (value: unknown) => value as string },
  parsers: { [BYTEA]: bytesOf },
} satisfies PGliteOptions;

/**
 * Why the server would not start, in words for the person at the console.
 *
 * - CONFIG          a setting in the environment is missing or malformed
 * - DATA_NEWER      the data were written by a newer version of Tautbook
 * - DATA_READ_ONLY  the data directory cannot be written
 * - DATA_IN_USE     another server has the data directory open
 * - DATABASE_GONE   the PostgreSQL server of DATABASE_URL does not answer
 * - PORT_BUSY       another program listens on the port
 */
export type StartRefusalCode = 'CONFIG' | 'DATA_NEWER' | 'DATA_READ_ONLY' | 'DATA_IN_USE' | 'DATABASE_GONE' | 'PORT_BUSY';

export class StartRefusal extends Error {
  override readonly name = 'StartRefusal';

  constructor(
    readonly code: StartRefusalCode,
    sentence: string,
    readonly wayOut: string,
    options?: ErrorOptions,
  ) {
    super(sentence, options);
  }
}

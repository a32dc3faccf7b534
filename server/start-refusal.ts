/**
 * Why the server would not start, in words for the person at the console.
 *
 * - CONFIG          a setting in the environment is missing or malformed
 * - DATA_NEWER      the data were written by a newer version of Tautbook
 * - DATA_READ_ONLY  the data directory cannot be made or written
 * - DATA_FULL       the disk is full
 * - DATA_DAMAGED    the embedded database cannot be opened
 * - DATA_IN_USE     another server has the data directory open
 * - DATABASE_GONE   the PostgreSQL server of DATABASE_URL does not answer
 * - PORT_BUSY       another program listens on the port
 * - BUILD_READ_ONLY the pages are older than their sources and cannot be built here
 */
export type StartRefusalCode = 'CONFIG' | 'DATA_NEWER' | 'DATA_READ_ONLY' | 'DATA_FULL' | 'DATA_DAMAGED' | 'DATA_IN_USE' | 'DATABASE_GONE' | 'PORT_BUSY' | 'BUILD_READ_ONLY';

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

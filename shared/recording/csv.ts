/** A recording as CSV (CONTRACTS.md section 2), read and printed by streaming. */
export { createCsvReader } from './csv-reader';
export type { CsvReader, CsvReaderOptions } from './csv-reader';
export type { CsvFault, CsvFaultCode } from './csv-fault';
export { describeCsvFault } from './csv-fault';
export { createCsvPrinter, shortestFloat32 } from './csv-printer';
export type { CsvDecimals, CsvPrinter } from './csv-printer';

/**
 * What `start` and `demo` share: open the data, build the client, listen, say where, and stop cleanly.
 *
 * Whatever keeps the server from starting ends as one sentence that says what to do and exit status 1; a stack trace is
 * for faults of ours.
 */
import { fileURLToPath } from 'node:url';
import { pino } from 'pino';
import type { Config } from '../config';
import type { OpenDatabase } from '../db/engine';
import { StartRefusal } from '../start-refusal';

export const root = fileURLToPath(new URL('../..', import.meta.url));

/** Log lines go to standard error, so that what a person should read stands alone on standard output. */
export function consoleLog(level: Config['logLevel']) {
  return pino({ level }, pino.destination({ dest: 2, sync: true }));
}

/** Runs closers in reverse order, once, each even when another failed. */
export class Closers {
  private readonly steps: (() => Promise<void> | void)[] = [];
  private closing: Promise<void> | undefined;

  add(step: () => Promise<void> | void): void {
    this.steps.push(step);
  }

  close(): Promise<void> {
    this.closing ??= this.closeAll();
    return this.closing;
  }

  private async closeAll(): Promise<void> {
    for (const step of this.steps.reverse()) {
      try {
        await step();
      } catch (error) {
        console.error('While stopping:', error instanceof Error ? error.message : error);
      }
    }
  }
}

export async function openData(config: Config): Promise<OpenDatabase> {
  const { openDatabase } = await import('../db/engine');
  const open = await openDatabase({ dataDir: config.dataDir, databaseUrl: config.databaseUrl });
  try {
    await open.migrate();
    return open;
  } catch (error) {
    await open.close();
    throw error;
  }
}

function refusalOf(error: unknown): StartRefusal | null {
  if (error instanceof StartRefusal) return error;
  const code = error instanceof Error && 'code' in error ? error.code : undefined;
  const path = error instanceof Error && 'path' in error ? String(error.path) : 'the disk';
  if (code === 'EROFS' || code === 'EACCES' || code === 'EPERM') {
    return new StartRefusal('DATA_READ_ONLY', `Cannot write to ${path}.`, 'Make it writable, or set DATA_DIR to a folder that is.', { cause: error });
  }
  if (code === 'ENOSPC') return new StartRefusal('DATA_READ_ONLY', 'The disk is full.', 'Free some space, or set DATA_DIR to a folder on another disk.', { cause: error });
  return null;
}

/**
 * Runs a command until SIGINT or SIGTERM. A second signal while stopping ends at once.
 *
 * @param command gets the closers to register what it opened
 */
export async function runUntilStopped(command: (closers: Closers) => Promise<void>): Promise<void> {
  const closers = new Closers();
  let stopping = false;
  const stop = () => {
    if (stopping) process.exit(1);
    stopping = true;
    console.log('\nStopping; what is recorded is safe.');
    closers.close().then(() => process.exit(0), () => process.exit(1));
  };
  process.on('SIGINT', stop);
  process.on('SIGTERM', stop);
  try {
    await command(closers);
  } catch (error) {
    await closers.close();
    const refusal = refusalOf(error);
    if (refusal) console.error(`${refusal.message} ${refusal.wayOut}`);
    else console.error(error);
    process.exit(1);
  }
}

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
import { requireFreePort } from '../listen';
import { StartRefusal } from '../start-refusal';
import { buildClientIfStale } from './client-build';
import { onStopSignal } from './stop-signals';

export const root = fileURLToPath(new URL('../..', import.meta.url));

/** Log lines go to standard error, so that what a person should read stands alone on standard output. */
export function consoleLog(level: Config['logLevel']) {
  return pino({ level }, pino.destination({ dest: 2, sync: true }));
}

/** Runs closers in reverse order, once, each even when another failed. */
export class Closers {
  private readonly steps: (() => Promise<void> | void)[] = [];
  private closing: Promise<boolean> | undefined;

  add(step: () => Promise<void> | void): void {
    this.steps.push(step);
  }

  /** @returns whether every step went well */
  close(): Promise<boolean> {
    this.closing ??= this.closeAll();
    return this.closing;
  }

  private async closeAll(): Promise<boolean> {
    let well = true;
    for (const step of this.steps.reverse()) {
      try {
        await step();
      } catch (error) {
        well = false;
        console.error('While stopping:', error instanceof Error ? error.message : error);
      }
    }
    return well;
  }
}

/** Opens and migrates the data, and looks whether the port is free, before anything that takes long. */
export async function openData(config: Config): Promise<OpenDatabase> {
  const { openDatabase } = await import('../db/engine');
  const open = await openDatabase({ dataDir: config.dataDir, databaseUrl: config.databaseUrl });
  try {
    await requireFreePort(config);
    await open.migrate();
    return open;
  } catch (error) {
    await open.close();
    throw error;
  }
}

/** The client is built beside the rest of the start; a build that fails is heard of where it is awaited. */
export function beginBuild(): Promise<boolean> {
  const built = buildClientIfStale(root);
  built.catch(() => undefined);
  return built;
}

/**
 * Runs a command until it is told to stop. Stopped while it still starts, there is nothing to finish: what is not committed
 * was never there.
 *
 * @param command gets the closers to register what it opened
 */
export async function runUntilStopped(command: (closers: Closers) => Promise<void>): Promise<void> {
  const closers = new Closers();
  let started = false;
  onStopSignal(() => {
    console.log('\nStopping; what is recorded is safe.');
    if (!started) process.exit(0);
    void closers.close().then((well) => {
      if (well) console.log('Stopped.');
      process.exit(well ? 0 : 1);
    });
  });
  try {
    await command(closers);
    started = true;
  } catch (error) {
    await closers.close();
    if (error instanceof StartRefusal) console.error(`${error.message} ${error.wayOut}`);
    else console.error(error);
    process.exit(1);
  }
}

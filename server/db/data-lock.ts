/**
 * One server on one data directory: two embedded databases on the same files would destroy them.
 *
 * The lock file names the process and, where the system tells it, when that process began, so that a lock left behind
 * by a killed server is recognised even when its number was given to another process.
 */
import { existsSync, mkdirSync, readFileSync, rmSync, writeFileSync } from 'node:fs';
import { dirname, join } from 'node:path';
import { StartRefusal } from '../start-refusal';

const codeOf = (error: unknown) => (error as NodeJS.ErrnoException).code ?? '';

/** Field 22 of /proc/PID/stat: start of the process in clock ticks since boot; null where there is no /proc. */
function startOfProcess(pid: number): string | null {
  try {
    const stat = readFileSync(`/proc/${pid}/stat`, 'utf8');
    return stat.slice(stat.lastIndexOf(')') + 2).split(' ')[19] ?? null;
  } catch {
    return null;
  }
}

function isAlive(pid: number): boolean {
  try {
    process.kill(pid, 0);
    return true;
  } catch (error) {
    return codeOf(error) === 'EPERM';
  }
}

function holderOf(file: string): number | null {
  try {
    const held = JSON.parse(readFileSync(file, 'utf8')) as { pid: number; start: string | null };
    return isAlive(held.pid) && startOfProcess(held.pid) === held.start ? held.pid : null;
  } catch {
    return null; // gone meanwhile, or cut off while it was written by a process that died
  }
}

/**
 * Makes the data directory when it is missing and takes its lock.
 *
 * @returns how to give the lock back
 * @throws StartRefusal DATA_READ_ONLY, DATA_FULL or DATA_IN_USE
 */
export function lockDataDirectory(dataDir: string): () => void {
  const file = join(dataDir, 'server.lock');
  const mine = JSON.stringify({ pid: process.pid, start: startOfProcess(process.pid) });
  const take = (): boolean => {
    try {
      writeFileSync(file, mine, { flag: 'wx' });
      return true;
    } catch (error) {
      if (codeOf(error) === 'EEXIST') return false;
      throw error;
    }
  };
  try {
    makeDirectory(dataDir);
    if (!take()) {
      const holder = holderOf(file);
      if (holder === null) rmSync(file, { force: true });
      if (holder !== null || !take()) throw inUse(dataDir, holder);
    }
  } catch (error) {
    throw refusalOf(dataDir, error) ?? error;
  }
  return () => rmSync(file, { force: true });
}

/** Step by step: mkdir's own recursion takes a read-only disk for a missing parent. */
function makeDirectory(path: string): void {
  if (existsSync(path)) return;
  makeDirectory(dirname(path));
  mkdirSync(path);
}

const inUse = (dataDir: string, holder: number | null) => new StartRefusal(
  'DATA_IN_USE',
  `Another Tautbook${holder === null ? '' : ` (process ${holder})`} has the data directory ${dataDir} open.`,
  'Stop it first, or start this one with another DATA_DIR and PORT.',
);

/** What the file system said, in words for the person at the console; null: a fault of ours. */
export function refusalOf(dataDir: string, error: unknown): StartRefusal | null {
  switch (codeOf(error)) {
    case 'EACCES':
    case 'EROFS':
    case 'EPERM':
      return new StartRefusal('DATA_READ_ONLY', `The data directory ${dataDir} cannot be written.`, 'Give this user the right to write there, or choose another place with DATA_DIR=/some/directory.', { cause: error });
    case 'ENOTDIR':
    case 'EEXIST':
    case 'ENOENT':
      return new StartRefusal('DATA_READ_ONLY', `The data directory ${dataDir} cannot be made: a part of its path is no directory.`, 'Choose another place with DATA_DIR=/some/directory.', { cause: error });
    case 'ENOSPC':
    case 'EDQUOT':
      return new StartRefusal('DATA_FULL', `The disk of the data directory ${dataDir} is full.`, 'Free some space, or choose a place on another disk with DATA_DIR=/some/directory.', { cause: error });
    default:
      return null;
  }
}

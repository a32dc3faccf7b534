/** One of the project's commands as a real process group, as a terminal would run it: what it says, how it ends, what is left of it. */
import { spawn } from 'node:child_process';
import { type AddressInfo, createServer } from 'node:net';
import { fileURLToPath } from 'node:url';

export const projectRoot = fileURLToPath(new URL('../..', import.meta.url));

export interface Program {
  pid: number;
  /** Standard output and standard error so far. */
  readonly said: string;
  readonly complained: string;
  /** Waits for a line of standard output. @throws when the program ends first */
  says(pattern: RegExp): Promise<RegExpExecArray>;
  /** To every process of the group, as the terminal does it. */
  signal(name: NodeJS.Signals): void;
  /** Resolves when nothing of the group writes any more. */
  ended: Promise<{ status: number | null; signal: NodeJS.Signals | null }>;
  /** Whether any process of the group is alive. */
  readonly alive: boolean;
  /** Ends it, whatever state it is in; for the end of a test. */
  kill(): Promise<void>;
}

export interface ProgramOptions {
  env?: Record<string, string>;
  uid?: number;
}

/** Settings of whoever runs the tests must not reach the programs. */
const settings = ['PORT', 'HOST', 'DATA_DIR', 'DATABASE_URL', 'PUBLIC_URL', 'AUTH_SECRET', 'TRUSTED_PROXIES', 'LOG_LEVEL', 'TEST_DATABASE_URL'];

export function startProgram(command: string, args: readonly string[], { env = {}, uid }: ProgramOptions = {}): Program {
  const clean = Object.fromEntries(Object.entries(process.env).filter(([name]) => !settings.includes(name) && !name.startsWith('SMTP_') && !name.startsWith('VITEST')));
  const child = spawn(command, args, {
    cwd: projectRoot, detached: true, stdio: ['ignore', 'pipe', 'pipe'], env: { ...clean, NODE_ENV: '', LOG_LEVEL: 'warn', ...env }, ...(uid === undefined ? {} : { uid, gid: uid }),
  });
  const heard = { out: '', err: '' };
  const waiting = new Set<() => void>();
  const wake = () => { for (const look of [...waiting]) look(); };
  child.stdout.setEncoding('utf8').on('data', (text: string) => { heard.out += text; wake(); });
  child.stderr.setEncoding('utf8').on('data', (text: string) => { heard.err += text; wake(); });
  let over = false;
  const ended = new Promise<{ status: number | null; signal: NodeJS.Signals | null }>((resolve, reject) => {
    child.once('error', reject);
    child.once('close', (status, signal) => {
      over = true;
      resolve({ status, signal });
      wake();
    });
  });
  const pid = child.pid ?? 0;
  const group = (signal: NodeJS.Signals | 0): boolean => {
    try {
      return process.kill(-pid, signal);
    } catch {
      return false;
    }
  };
  return {
    pid,
    ended,
    get said() { return heard.out; },
    get complained() { return heard.err; },
    get alive() { return group(0); },
    signal: (name) => void group(name),
    says: (pattern) => new Promise((resolve, reject) => {
      const look = () => {
        const found = pattern.exec(heard.out);
        if (found === null && !over) return;
        waiting.delete(look);
        if (found) resolve(found);
        else reject(new Error(`It ended without saying ${pattern}.\n${heard.out}\n${heard.err}`));
      };
      waiting.add(look);
      look();
    }),
    async kill() {
      group('SIGKILL');
      await ended.catch(() => undefined);
    },
  };
}

/** A port that nothing listens on just now. */
export async function freePort(): Promise<number> {
  const probe = createServer();
  await new Promise<void>((resolve) => probe.listen(0, '127.0.0.1', resolve));
  const { port } = probe.address() as AddressInfo;
  await new Promise((resolve) => probe.close(resolve));
  return port;
}

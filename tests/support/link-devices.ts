/** Simulated devices in a process that tests may kill. */
import { type ChildProcess, spawn } from 'node:child_process';
import { createInterface } from 'node:readline';
import { fileURLToPath } from 'node:url';

export interface Acknowledged {
  /** Place of its key. */
  device: number;
  run: string;
  /** Seed of the run. */
  seed: number;
  samples: number;
}

export class LinkDevices {
  /** What each device was told last. */
  readonly told = new Map<number, Acknowledged>();
  private readonly child: ChildProcess;
  private wake: () => void = () => undefined;

  constructor(url: string, keys: readonly string[], seed: number) {
    this.child = spawn(process.execPath, ['--import', 'tsx', fileURLToPath(new URL('./link-device-process.ts', import.meta.url))], {
      stdio: ['ignore', 'pipe', 'inherit'], env: { ...process.env, LINK_URL: url, LINK_KEYS: keys.join(','), LINK_SEED: String(seed) },
    });
    createInterface({ input: this.child.stdout as NodeJS.ReadableStream }).on('line', (line) => {
      const said = JSON.parse(line) as Acknowledged;
      this.told.set(said.device, said);
      this.wake();
    });
  }

  async until(holds: (told: ReadonlyMap<number, Acknowledged>) => boolean): Promise<void> {
    while (!holds(this.told)) await new Promise<void>((resolve) => { this.wake = resolve; });
  }

  async kill(): Promise<void> {
    const ended = new Promise((resolve) => this.child.once('exit', resolve));
    this.child.kill('SIGKILL');
    await ended;
  }
}

/** A server process that tests may kill and start again on the same data. */
import { type ChildProcess, spawn } from 'node:child_process';
import { mkdtempSync, rmSync } from 'node:fs';
import { createServer, type AddressInfo } from 'node:net';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { createInterface } from 'node:readline';
import { fileURLToPath } from 'node:url';
import type { DeviceId, TrialId } from '@shared/api/common';
import { openDatabase, type OpenDatabase } from '@server/db/engine';
import { testPassword } from './app';
import { HttpClient } from './http-client';

export interface ProcessLab {
  devices: { id: DeviceId; key: string }[];
  /** E-mail of the operator. */
  operator: string;
  trialIds: TrialId[];
}

const freePort = (): Promise<number> => new Promise((resolve) => {
  const server = createServer().listen(0, '127.0.0.1', () => {
    const { port } = server.address() as AddressInfo;
    server.close(() => resolve(port));
  });
});

export class LinkHouse {
  private child: ChildProcess | null = null;
  url = '';
  lab: ProcessLab = { devices: [], operator: '', trialIds: [] };

  private constructor(private readonly dataDir: string, private readonly port: number, private readonly devices: number) {}

  static async open(devices: number): Promise<LinkHouse> {
    const house = new LinkHouse(mkdtempSync(join(tmpdir(), 'tautbook-house-')), await freePort(), devices);
    await house.start();
    return house;
  }

  /** Resolves once it listens. @throws when it ends before */
  start(): Promise<void> {
    const child = spawn(process.execPath, ['--import', 'tsx', fileURLToPath(new URL('./link-process.ts', import.meta.url))], {
      stdio: ['ignore', 'pipe', 'inherit'],
      env: { ...process.env, DATABASE_URL: '', DATA_DIR: this.dataDir, PORT: String(this.port), LAB_DEVICES: String(this.devices), LOG_LEVEL: 'warn' },
    });
    this.child = child;
    return new Promise((resolve, reject) => {
      child.once('exit', (code) => reject(new Error(`the server ended with ${code} before it listened`)));
      createInterface({ input: child.stdout as NodeJS.ReadableStream }).once('line', (line) => {
        const said = JSON.parse(line) as { url: string; lab: ProcessLab };
        this.url = said.url;
        this.lab = said.lab;
        resolve();
      });
    });
  }

  async end(signal: 'SIGKILL' | 'SIGTERM'): Promise<void> {
    const { child } = this;
    if (child === null) return;
    this.child = null;
    const ended = new Promise((resolve) => child.once('exit', resolve));
    child.kill(signal);
    await ended;
  }

  async operator(): Promise<HttpClient> {
    const client = new HttpClient(this.url);
    await client.signIn(this.lab.operator, testPassword);
    return client;
  }

  /** The data of a server that has ended. */
  data(): Promise<OpenDatabase> {
    return openDatabase({ dataDir: this.dataDir });
  }

  async close(): Promise<void> {
    await this.end('SIGKILL');
    rmSync(this.dataDir, { recursive: true, force: true });
  }
}

/** Runs one of the sample clients of samples/link against a server, through a line that breaks once, and compares what was stored. */
import { spawn } from 'node:child_process';
import { mkdtempSync, rmSync, writeFileSync } from 'node:fs';
import { connect, createServer, type AddressInfo, type Server } from 'node:net';
import { once } from 'node:events';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { fileURLToPath } from 'node:url';
import { expect } from 'vitest';
import type { Trial } from '@shared/api/sessions';
import { createCsvPrinter } from '@shared/recording';
import { parseRig } from '@shared/rig';
import { simulateRun } from '@server/simulator';
import { heronFile, type MiniLab, type TestApp } from './app';

const root = fileURLToPath(new URL('../..', import.meta.url));

/** A line to the server that is cut once, after so many bytes from the device. */
async function breakingLine(to: number, afterBytes: number): Promise<{ server: Server; url: string; cuts: () => number }> {
  let cuts = 0;
  const server = createServer((device) => {
    const onward = connect(to, '127.0.0.1');
    let passed = 0;
    const drop = () => {
      device.destroy();
      onward.destroy();
    };
    device.on('data', (piece: Buffer) => {
      passed += piece.length;
      if (cuts === 0 && passed > afterBytes) {
        cuts += 1;
        drop();
      } else onward.write(piece);
    });
    onward.on('data', (piece: Buffer) => device.write(piece));
    for (const end of [device, onward]) end.on('error', drop).on('close', drop);
  }).listen(0, '127.0.0.1');
  await once(server, 'listening');
  return { server, url: `ws://127.0.0.1:${(server.address() as AddressInfo).port}`, cuts: () => cuts };
}

/** Streams a simulated recording with a gap as an armed trial; what is in the book is what was in the file. */
export async function recordsAsArmed(app: TestApp, lab: MiniLab, command: readonly string[]): Promise<void> {
  const folder = mkdtempSync(join(tmpdir(), 'tautbook-client-'));
  const { server, url, cuts } = await breakingLine(Number(new URL(app.url).port), 150_000);
  try {
    const run = simulateRun({ rig: parseRig(heronFile), task: 'reach', durationS: 4, seed: 21, rateHz: 1000, troubles: [{ kind: 'gap', atS: 2, durationS: 0.1 }] });
    const printer = createCsvPrinter(run.channels);
    const file = join(folder, 'recording.csv');
    let text = printer.header();
    for (const chunk of run) text += printer.rows(chunk);
    writeFileSync(file, text);

    const trial = lab.trialIds[0] as string;
    const operator = await app.signedIn(lab.people.operator);
    const child = spawn(command[0] as string, [...command.slice(1), '--url', url, '--key', lab.deviceKey, '--rig', 'heron-8', file], { cwd: root, stdio: ['ignore', 'pipe', 'pipe'] });
    let said = '';
    child.stdout.setEncoding('utf8').on('data', (piece: string) => { said += piece; });
    child.stderr.setEncoding('utf8').on('data', (piece: string) => { said += piece; });
    const ended = once(child, 'exit');
    await expect.poll(async () => (await operator.post(`/api/trials/${trial}/arm`, { deviceId: lab.deviceId })).status).toBe(200);
    const [code] = (await ended) as [number];
    expect({ code, said }).toEqual({ code: 0, said: expect.stringMatching(/^\d+ samples in \d+ batches are in the book as run .*\n$/) as string });
    expect(cuts()).toBe(1);

    const { body } = await operator.get<Trial>(`/api/trials/${trial}`);
    expect(body.recording).toMatchObject({ state: 'closed', endReason: 'done', rateHz: 1000 });
    expect(body.recording?.gaps).toHaveLength(1);
    const lead = await app.signedIn(lab.people.lead);
    expect(await (await lead.raw('GET', `/api/trials/${trial}/recording.csv`)).text()).toBe(text);
  } finally {
    server.close();
    rmSync(folder, { recursive: true, force: true });
  }
}

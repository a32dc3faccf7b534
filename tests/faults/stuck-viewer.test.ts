/** A viewer that joined a running trial and never reads: it costs a bounded number of bytes, and neither the recorder nor the other viewers wait for it. */
import type { Socket } from 'node:net';
import { unpack } from 'msgpackr';
import { afterAll, beforeAll, expect, it } from 'vitest';
import WebSocket from 'ws';
import { type LiveFromServer, liveSamples } from '@shared/api/live';
import type { TrialId } from '@shared/api/common';
import type { Trial } from '@shared/api/sessions';
import { type Chunk, channelNames } from '@shared/recording';
import { parseRig } from '@shared/rig';
import { readChunks } from '@server/ingest';
import { createSimulatedDevice, simulateRun } from '@server/simulator';
import { heronFile, makeMiniLab, type MiniLab, startApp, type TestApp } from '../support/app';
import type { HttpClient } from '../support/http-client';
import { differences } from '../support/link-compare';

let app: TestApp;
let lab: MiniLab;
beforeAll(async () => {
  app = await startApp();
  lab = await makeMiniLab(app);
});
afterAll(() => app.close());

/** From here on a viewer's samples are left out. */
const SLOW_BYTES = 300_000;
/** From here on a viewer is let go. */
const STUCK_BYTES = 8_500_000;

interface Watching {
  socket: WebSocket;
  line: Socket;
  newestS: number;
  /** The server has looked at everything that was sent so far. */
  handled(): Promise<void>;
}

/** A person with the trial's page open, and the server's end of their line. */
async function watch(trial: TrialId, person: HttpClient): Promise<Watching> {
  const line = new Promise<Socket>((resolve) => app.book.server.once('upgrade', (_req, socket: Socket) => resolve(socket)));
  const socket = new WebSocket(`${app.url.replace('http', 'ws')}/live/v1`, { headers: { cookie: person.cookie, origin: app.url } });
  let answered: () => void = () => undefined;
  const watching: Watching = {
    socket, line: await line, newestS: -1,
    handled: () => new Promise((resolve) => {
      answered = resolve;
      socket.send(JSON.stringify({ type: 'alive' }));
    }),
  };
  socket.on('message', (data: Buffer, isBinary) => {
    if (!isBinary) {
      if ((JSON.parse(data.toString()) as LiveFromServer).type === 'alive') answered();
      return;
    }
    const { timesS } = liveSamples.parse(unpack(data));
    watching.newestS = Buffer.from(timesS).readDoubleLE(timesS.byteLength - 8);
  });
  await new Promise((resolve) => socket.once('open', resolve));
  socket.send(JSON.stringify({ type: 'join', room: `trial:${trial}` }));
  await watching.handled();
  return watching;
}

it('gets no samples while it is stuck, the newest when it reads again, and is let go when even words pile up', { timeout: 240_000 }, async () => {
  const trial = lab.trialIds[0] as TrialId;
  const device = createSimulatedDevice({
    url: app.url, key: lab.deviceKey, rig: { code: 'heron-8', revision: 1 }, channels: channelNames(8), humanDelayMs: [1, 2], speed: 10, keepSamples: true,
    source: () => simulateRun({ rig: parseRig(heronFile), task: 'reach', seed: 5, durationS: 3600, chunkSamples: 100 }),
  });
  const operator = await app.signedIn(lab.people.operator);
  const [stuck, gone] = [await watch(trial, operator), await watch(trial, operator)];
  const reading = await watch(trial, await app.signedIn(lab.people.lead));
  await device.connect();
  expect((await operator.post(`/api/trials/${trial}/arm`, { deviceId: lab.deviceId })).status).toBe(200);
  await expect.poll(() => stuck.newestS).toBeGreaterThan(0);

  /** The other one reads to and fro, of which the stuck ones are told, until so much of that waits in the server: what the system holds for the line fills up first. */
  const fill = async ({ line }: Watching, bytes: number): Promise<void> => {
    while (!line.destroyed && line.writableLength < bytes) {
      for (let i = 0; i < 500; i += 1) reading.socket.send(JSON.stringify({ type: 'reading', room: `trial:${trial}`, atS: i / 100 }));
      await reading.handled();
    }
  };
  for (const { socket } of [stuck, gone]) socket.pause();
  await fill(stuck, SLOW_BYTES);

  const [fromS, acknowledged] = [reading.newestS, device.report().runs[0]?.acknowledgedSamples ?? 0];
  const waiting = stuck.line.writableLength;
  // Thirty seconds of the trial are 780 kB of samples.
  await expect.poll(() => reading.newestS, { timeout: 120_000 }).toBeGreaterThan(fromS + 30);
  expect(stuck.line.writableLength).toBeLessThan(waiting + 100_000);
  expect(device.report().runs[0]?.acknowledgedSamples).toBeGreaterThan(acknowledged);

  stuck.socket.resume();
  await expect.poll(() => stuck.newestS, { timeout: 120_000 }).toBeGreaterThan(fromS + 30);
  await fill(gone, STUCK_BYTES);
  await expect.poll(() => gone.line.destroyed).toBe(true);

  device.stop('done');
  await device.settled();
  const [run] = device.report().runs;
  expect(device.report()).toMatchObject({ connections: 1, faults: {} });
  const { body } = await operator.get<Trial>(`/api/trials/${trial}`);
  expect(body).toMatchObject({ state: 'stopped', recording: { state: 'closed', endReason: 'done', gaps: [] } });
  const stored: Chunk[] = [];
  for await (const chunk of readChunks(app.open.db, body.recording?.id ?? '')) stored.push(chunk);
  expect(differences(stored, device.samplesOf(run?.run ?? ''))).toEqual([]);
  await device.close();
  for (const { socket } of [stuck, reading]) socket.terminate();
});

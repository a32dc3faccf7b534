/**
 * How far the run page is behind the rig: the newest painted sample against the wall clock, on one machine, in a real
 * browser that draws without a graphics card. Beside it a bare listener of the same room, which draws nothing.
 */
import { fileURLToPath } from 'node:url';
import { unpack } from 'msgpackr';
import WebSocket from 'ws';
import { liveSamples } from '@shared/api/live';
import type { Trial } from '@shared/api/sessions';
import { channelNames } from '@shared/recording';
import { parseRig } from '@shared/rig';
import { createSimulatedDevice, simulateRun } from '@server/simulator';
import { heronFile, makeMiniLab, startApp, testPassword } from '../support/app';
import { launchBrowser, visitor } from '../support/browser';
import type { Row } from './row';

export const name = 'live-view';

const WATCHED_S = 10;
const quantile = (values: readonly number[], share: number): number => [...values].sort((a, b) => a - b)[Math.min(values.length - 1, Math.floor(share * values.length))] ?? Number.NaN;

export async function run(): Promise<Row[]> {
  const app = await startApp({ clientDirectory: fileURLToPath(new URL('../../dist/client', import.meta.url)) });
  const lab = await makeMiniLab(app);
  const device = createSimulatedDevice({
    url: app.url, key: lab.deviceKey, rig: { code: 'heron-8', revision: 1 }, channels: channelNames(8), humanDelayMs: [10, 20],
    source: () => simulateRun({ rig: parseRig(heronFile), task: 'reach', durationS: 120, seed: 3, rateHz: 1000, chunkSamples: 25 }),
  });
  const browser = await launchBrowser();
  try {
    await device.connect();
    const { page } = await visitor(browser);
    await page.goto(`${app.url}/sessions/${lab.sessionId}/run`);
    await page.getByLabel('E-mail').fill(lab.people.operator.email);
    await page.getByLabel('Password', { exact: true }).fill(testPassword);
    await page.getByRole('button', { name: 'Sign in', exact: true }).click();
    await page.getByRole('button', { name: 'Arm trial 1' }).click();
    await page.getByRole('button', { name: 'Stop the trial' }).waitFor();
    const operator = await app.signedIn(lab.people.operator);
    const { body: trial } = await operator.get<Trial>(`/api/trials/${lab.trialIds[0]}`);
    const startedMs = Date.parse(trial.recording?.startedAt ?? '');

    const heard: number[] = [];
    const listener = new WebSocket(`${app.url.replace('http', 'ws')}/live/v1`, { headers: { cookie: operator.cookie, origin: app.url } });
    listener.on('open', () => listener.send(JSON.stringify({ type: 'join', room: `trial:${lab.trialIds[0]}` })));
    listener.on('message', (data: Buffer, isBinary) => {
      if (!isBinary) return;
      const { timesS } = liveSamples.parse(unpack(data));
      heard.push(Date.now() - startedMs - 1000 * Buffer.from(timesS).readDoubleLE(timesS.byteLength - 8));
    });

    // Looked at once a frame, after the page has settled, as a person would see it.
    const painted = await page.evaluate<number[]>(`new Promise((resolve) => {
      const behind = [];
      const stave = document.querySelector('[data-testid=live-stave]');
      let from = null;
      requestAnimationFrame(function look(now) {
        from ??= now;
        if (now - from > 2000) behind.push(Date.now() - ${startedMs} - 1000 * Number(stave.dataset.paintedS));
        if (now - from > ${(WATCHED_S + 2) * 1000}) resolve(behind);
        else requestAnimationFrame(look);
      });
    })`);
    listener.close();
    const [median, late, bare] = [quantile(painted, 0.5), quantile(painted, 0.95), quantile(heard, 0.95)];
    return [
      { name: 'painted behind the rig, median', value: median, unit: 'ms', baseline: `bare listener ${quantile(heard, 0.5).toFixed(0)} ms`, ratio: quantile(heard, 0.5) / median, target: 'under 200 ms', met: median < 200 },
      { name: 'painted behind the rig, 95 %', value: late, unit: 'ms', baseline: `bare listener ${bare.toFixed(0)} ms`, ratio: bare / late, target: 'under 200 ms', met: late < 200 },
      { name: 'pictures a second', value: painted.length / WATCHED_S, unit: '/s', baseline: null, ratio: null, target: 'informs', met: null },
    ];
  } finally {
    await device.close(0);
    await browser.close();
    await app.close();
  }
}

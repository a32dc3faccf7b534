/**
 * Takes the README's pictures of our own screens, of the demo lab on a fixed day: the same code gives the same pictures.
 *
 *   npx vite build && npx tsx tests/e2e/take-pictures.ts
 *
 * `run-light` shows a trial as it streams from the simulated device; its moment differs by some milliseconds from time to time.
 */
import { mkdirSync, readFileSync, statSync } from 'node:fs';
import { fileURLToPath } from 'node:url';
import type { Page } from 'playwright-core';
import { channelNames } from '@shared/recording';
import { parseRig } from '@shared/rig';
import { createSimulatedDevice, simulateRun } from '@server/simulator';
import { launchBrowser } from '../support/browser';
import { openDemoHouse } from './support/demo-lab';
import { labAddresses } from './support/lab-addresses';
import { settled } from './support/looking';

const folder = fileURLToPath(new URL('../../samples/screens/', import.meta.url));
/** A repository is no place for heavy pictures. */
const largestBytes = 250_000;
const nowMs = Date.UTC(2026, 4, 14, 10, 30);

mkdirSync(folder, { recursive: true });
const [house, browser] = await Promise.all([openDemoHouse({ nowMs }), launchBrowser()]);
const at = await labAddresses(house);

async function take(name: string, lamp: 'light' | 'dark', who: 'lead' | 'operator', address: string, settle: (page: Page) => Promise<void> = async () => undefined): Promise<void> {
  const { page, context } = await house.enter(browser, who, { colorScheme: lamp, reducedMotion: 'reduce' });
  await page.clock.setFixedTime(nowMs);
  await page.goto(address);
  await settled(page);
  await settle(page);
  await settled(page);
  const path = `${folder}${name}.png`;
  await page.screenshot({ path });
  await context.close();
  const { size } = statSync(path);
  process.stdout.write(`${name}.png ${Math.round(size / 1000)} kB\n`);
  if (size > largestBytes) throw new Error(`${name}.png is larger than ${largestBytes / 1000} kB\n`);
}

/** Where a cable is at its limit, with the margin beside it. */
const moment = `/trials/${at.richTrial}?at=7.640&from=7.487&to=7.847`;
const closer = async (page: Page) => {
  for (let times = 0; times < 3; times += 1) await page.keyboard.press('-');
};

await take('trial-light', 'light', 'operator', moment, closer);
await take('trial-dark', 'dark', 'lead', moment, closer);
await take('rig-light', 'light', 'lead', `/rigs/${at.heron}`);
await take('today-light', 'light', 'operator', '/');

// A trial as it streams: armed, with trouble seen live. A run page reads no wall clock but what the session says.
const { device: { key, revision, rigFile } } = house.lab;
const rig = parseRig(JSON.parse(readFileSync(rigFile, 'utf8')));
const device = createSimulatedDevice({
  url: house.url, key, rig: { code: 'heron-8', revision }, channels: channelNames(8), humanDelayMs: [10, 20],
  source: () => simulateRun({
    rig, task: 'pick-and-place', durationS: 40, seed: 12, rateHz: 1000, chunkSamples: 25,
    troubles: [{ kind: 'slack', atS: 3.2, durationS: 0.4, cable: 4 }, { kind: 'saturation', atS: 6.5, durationS: 0.6 }, { kind: 'pretension', atS: 9, durationS: 0.6 }],
  }),
});
await device.connect();
const run = await house.enter(browser, 'operator', { colorScheme: 'light' });
await run.page.goto(`/sessions/${at.openSession}/run`);
const judge = run.page.getByRole('button', { name: 'Keep the outcome' });
const arm = run.page.getByRole('button', { name: /^Arm trial/ });
await judge.or(arm).first().waitFor();
if (await judge.isVisible()) await judge.click();
await arm.click();
await run.page.waitForFunction(() => Number(document.querySelector<HTMLElement>('[data-testid=live-stave]')?.dataset['paintedS']) > 10.6, undefined, { polling: 'raf' });
await run.page.screenshot({ path: `${folder}run-light.png` });
process.stdout.write(`run-light.png ${Math.round(statSync(`${folder}run-light.png`).size / 1000)} kB\n`);
await device.close(0);
await browser.close();
await house.close();

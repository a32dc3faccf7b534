/**
 * Takes the README's pictures of our own screens, of the demo lab on a fixed day: the same code gives the same pictures.
 *
 *   npx vite build && npx tsx tests/e2e/take-pictures.ts
 *
 * `run-light` is taken where a trial streams, by the test that records one.
 */
import { mkdirSync, statSync } from 'node:fs';
import { fileURLToPath } from 'node:url';
import type { Page } from 'playwright-core';
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
await browser.close();
await house.close();

/** The clinician opens what is for them and is refused the rest, in words, on every way there. */
import type { Browser } from 'playwright-core';
import { afterAll, beforeAll, expect, test } from 'vitest';
import { cast, demoPassword } from '@server/db/seed/cast';
import { launchBrowser, type Visitor, visitor } from '../support/browser';
import { type DemoHouse, openDemoHouse, signInByForm } from './support/demo-lab';
import { labAddresses, type LabAddresses } from './support/lab-addresses';

let house: DemoHouse;
let browser: Browser;
let at: LabAddresses;
let clinician: Visitor;

beforeAll(async () => {
  [house, browser] = await Promise.all([openDemoHouse(), launchBrowser()]);
  at = await labAddresses(house);
  clinician = await visitor(browser, { baseURL: house.url, expected: /status of (401|403|404)/ });
  await clinician.page.goto('/');
  await signInByForm(clinician.page, cast.clinician.email, demoPassword);
  await clinician.page.getByRole('heading', { name: 'Today' }).waitFor();
});

afterAll(async () => {
  await browser?.close();
  await house?.close();
});

test('Today says that no summary was released, and leads to the studies', async () => {
  const { page } = clinician;
  await page.getByText('No summary has been released to you').waitFor();
  expect(await page.getByRole('navigation', { name: 'Chapters' }).getByRole('link').allTextContents()).toEqual(['Today', 'Studies']);
  await page.getByRole('link', { name: /^Mortise/ }).click();
  await page.getByRole('heading', { level: 1, name: /^Mortise/ }).waitFor();
});

test('a study shows its protocol and members, to a blind member the codes alone, and neither participants nor sessions', async () => {
  const { page } = clinician;
  await page.getByRole('heading', { name: 'Protocol' }).waitFor();
  await page.getByRole('row', { name: /K.*hidden from you/ }).waitFor();
  const shown = await page.getByRole('main').textContent();
  for (const hidden of ['Low pretension', 'MT-12', 'Participants', 'Plan a session']) expect(shown).not.toContain(hidden);
});

test('a session, its log, its run page and a trial that no released summary names read as if they were not there', async () => {
  const { page } = clinician;
  for (const address of [`/sessions/${at.closedSession}`, `/sessions/${at.closedSession}/log`, `/sessions/${at.openSession}/run`, `/trials/${at.richTrial}`, `/studies/${at.sedge}/sessions/new`]) {
    await page.goto(address);
    await page.getByRole('heading', { level: 1, name: /No such page|This page is not open to you/ }).waitFor();
    expect(await page.getByRole('main').textContent()).not.toMatch(/SG-0|Pick a block/);
  }
});

test('pages of the installation say that they are not for this role, and the way back works', async () => {
  const { page } = clinician;
  for (const address of ['/devices', '/people', '/audit']) {
    await page.goto(address);
    await page.getByRole('heading', { level: 1, name: 'This page is not open to you' }).waitFor();
  }
  await page.getByRole('link', { name: 'To Today', exact: true }).click();
  await page.getByRole('heading', { name: 'Today' }).waitFor();
  expect(clinician.complaints).toEqual([]);
});

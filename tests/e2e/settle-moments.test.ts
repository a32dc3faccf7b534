/** Two leads settle the moments of a study, one by keyboard alone: verdicts, reasons, marks for many, taking back, and who was first. */
import { readFileSync } from 'node:fs';
import { fileURLToPath } from 'node:url';
import type { Browser, Page } from 'playwright-core';
import { afterAll, beforeAll, describe, expect, test } from 'vitest';
import type { Moment } from '@shared/api/review';
import { makeMiniLab, startApp, testPassword, type MiniLab, type TestApp } from '../support/app';
import { seriousFindings } from '../support/axe';
import { launchBrowser, visitor, type Visitor } from '../support/browser';
import type { HttpClient } from '../support/http-client';

let app: TestApp;
let lab: MiniLab;
let browser: Browser;
let first: Visitor;
let second: Visitor;
let http: HttpClient;
let total = 0;

beforeAll(async () => {
  [app, browser] = await Promise.all([startApp({ clientDirectory: fileURLToPath(new URL('../../dist/client', import.meta.url)) }), launchBrowser()]);
  lab = await makeMiniLab(app);
  const other = await app.person('lead', 'Second Lead');
  await app.book.services.studies.setMember(lab.study.id, other.id, 'lead', true);
  http = await app.signedIn(lab.people.lead);
  // The reference recording with its seventeen incidents, twice.
  const body = Uint8Array.from(readFileSync(new URL('../conformance/recordings/session-a.csv.gz', import.meta.url)));
  for (const trial of lab.trialIds.slice(0, 2)) await (await http.raw('POST', `/api/trials/${trial}/recording?fileName=session-a.csv.gz`, { body, headers: { 'content-type': 'application/gzip' } })).text();
  await app.book.analysis.settled();
  total = (await moments()).length;
  const options = { expected: /401 \(Unauthorized\)|409 \(Conflict\)/ };
  [first, second] = await Promise.all([visitor(browser, options), visitor(browser, { ...options, colorScheme: 'dark' })]);
  await Promise.all([signIn(first.page, lab.people.lead), signIn(second.page, other)]);
});

afterAll(async () => {
  await browser?.close();
  await app?.close();
});

const moments = async () => (await http.get<{ moments: Moment[] }>(`/api/studies/${lab.study.id}/moments`)).body.moments;
const settledIn = async () => (await moments()).filter(({ verdict }) => verdict !== null).length;
const options = (page: Page) => page.getByRole('listbox', { name: 'Moments of this study' }).getByRole('option');
const nth = (page: Page, n: number) => options(page).nth(n);

async function signIn(page: Page, person: { email: string }): Promise<void> {
  const to = `/studies/${lab.study.id}/moments`;
  await page.goto(`${app.url}${to}`);
  await page.getByLabel('E-mail').fill(person.email);
  await page.getByLabel('Password', { exact: true }).fill(testPassword);
  await page.getByRole('button', { name: 'Sign in', exact: true }).click();
  await page.waitForURL(`${app.url}${to}`);
  await options(page).first().waitFor();
}

describe.sequential('the worklist', () => {
  test('shows every moment with a strip of the stave and the first one at hand', async () => {
    const { page } = first;
    await page.getByText(`0 of ${total} moments settled`).waitFor();
    expect(await nth(page, 0).textContent()).toMatch(/Slack, cable 4 for 0\.33\ss, down to 0\.16\sN/);
    await page.locator('[data-drawn]').first().waitFor();
    expect(await seriousFindings(page)).toEqual([]);
    expect(await page.getByRole('listbox').evaluate((list) => list === document.activeElement)).toBe(true);
  });

  test('takes verdicts by single keys, the reason with the next one, and goes on to what waits', async () => {
    const { page } = first;
    await page.keyboard.press('y');
    await nth(page, 0).getByText('confirmed').waitFor();
    await page.keyboard.press('r');
    await page.keyboard.type('A hole of the logger, not of the rig.');
    await page.keyboard.press('Enter');
    await page.keyboard.press('x');
    await nth(page, 1).getByText('dismissed').waitFor();
    await page.keyboard.press('u');
    await nth(page, 2).getByText('unsure').waitFor();
    const [one, two, three] = await moments();
    expect([one, two, three].map((moment) => [moment?.verdict?.value, moment?.verdict?.reason])).toEqual([['confirmed', ''], ['dismissed', 'A hole of the logger, not of the rig.'], ['unsure', '']]);
  });

  test('shows the other lead the verdicts as they come, without the labels that are hidden from them', async () => {
    await nth(second.page, 0).getByText('confirmed').waitFor();
    await second.page.getByText(`3 of ${total} moments settled`).waitFor();
    expect(await nth(second.page, 0).textContent()).toContain('condition A');
    expect(await second.page.getByText('with cue').count()).toBe(0);
  });

  test('takes the last verdict back', async () => {
    const { page } = first;
    await page.keyboard.press('z');
    await nth(page, 2).getByText('to judge').waitFor();
    expect(await settledIn()).toBe(2);
  });

  test('tells the second of two what the first wrote, and keeps their words', async () => {
    // The second lead's page does not hear of it: as when both press at the same moment.
    const all = await moments();
    const contested = all[4] as Moment;
    await second.page.getByRole('listbox').focus();
    await nth(second.page, 4).click();
    await second.page.getByRole('textbox').fill('I see it otherwise.');
    await second.context.setOffline(true);
    await second.context.setOffline(false);
    await second.page.route('**/moments', (route) => route.abort());
    await http.post(`/api/studies/${lab.study.id}/verdicts`, { verdicts: [{ flagId: contested.id, value: 'confirmed', reason: 'Seen in the video.', seen: contested.seen }] });
    await second.page.getByRole('button', { name: 'X dismiss' }).click();
    const told = second.page.getByRole('alert');
    await told.getByText('lead: confirmed, Seen in the video.').waitFor();
    expect(await second.page.getByRole('textbox').inputValue()).toBe('I see it otherwise.');
    await second.page.unroute('**/moments');
    expect((await moments())[4]?.verdict?.value).toBe('confirmed');
  });

  test('narrows to what is asked for, in the address too, and says when nothing fits', async () => {
    const { page } = first;
    await page.getByLabel('kind', { exact: true }).selectOption('saturation');
    await expect.poll(() => options(page).count()).toBe((await moments()).filter(({ kind }) => kind === 'saturation').length);
    expect(page.url()).toContain('kind=saturation');
    await page.getByLabel('cable', { exact: true }).selectOption('4');
    await page.getByText('No moment fits').waitFor();
    await page.getByRole('button', { name: /^Show all/ }).click();
    await expect.poll(() => page.getByRole('listbox').getAttribute('aria-activedescendant')).not.toBeNull();
  });

  test('judges many that were marked at once, and takes them back at once', async () => {
    const { page } = first;
    await page.getByLabel('state', { exact: true }).selectOption('open');
    const before = await settledIn();
    await page.getByRole('listbox').focus();
    await page.keyboard.press('Home');
    for (let i = 0; i < 19; i += 1) await page.keyboard.press('Shift+ArrowDown');
    await page.getByRole('button', { name: 'X dismiss 20' }).waitFor();
    await page.getByRole('listbox').focus();
    await page.keyboard.press('x');
    await page.getByText(`${before + 20} of ${total} moments settled`).waitFor();
    expect(await settledIn()).toBe(before + 20);
    await page.keyboard.press('z');
    await page.getByText(`${before} of ${total} moments settled`).waitFor();
    expect(await settledIn()).toBe(before);
  });

  test('opens the trial at the moment', async () => {
    const { page } = first;
    await page.getByRole('button', { name: 'show all' }).click();
    await page.getByRole('listbox').focus();
    await page.keyboard.press('Home');
    await page.keyboard.press('o');
    await page.waitForURL(/\/trials\/.*at=2\.595/);
    await page.getByTestId('margin-margin').getByText('Slack, cable 4').first().waitFor();
    expect(first.complaints).toEqual([]);
  });

  test('is for reading only to an operator', async () => {
    const { page } = await visitor(browser, { expected: /401/ });
    await signIn(page, lab.people.operator);
    await page.getByText('Leads of the study judge its moments.').waitFor();
    await page.keyboard.press('y');
    expect(await page.getByRole('button', { name: 'Y confirm' }).count()).toBe(0);
    expect(await seriousFindings(page)).toEqual([]);
  });
});

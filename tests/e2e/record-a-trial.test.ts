/**
 * A trial from arming to a note that a second person sees appear: the real server, a simulated device on the real link, two
 * people in real browsers.
 */
import { fileURLToPath } from 'node:url';
import type { Browser, Page } from 'playwright-core';
import { afterAll, beforeAll, describe, expect, test } from 'vitest';
import { parseRig } from '@shared/rig';
import { channelNames } from '@shared/recording';
import { createSimulatedDevice, simulateRun, type SimulatedDevice } from '@server/simulator';
import { heronFile, makeMiniLab, startApp, testPassword, type MiniLab, type TestApp } from '../support/app';
import { seriousFindings } from '../support/axe';
import { launchBrowser, visitor, type Visitor } from '../support/browser';

const clientDirectory = fileURLToPath(new URL('../../dist/client', import.meta.url));

let app: TestApp;
let lab: MiniLab;
let browser: Browser;
let device: SimulatedDevice;
let operator: Visitor;
let lead: Visitor;

/** The first page is asked for before its reader has signed in. */
const notSignedInYet = /401 \(Unauthorized\)/;

const heron = parseRig(heronFile);

beforeAll(async () => {
  [app, browser] = await Promise.all([startApp({ clientDirectory }), launchBrowser()]);
  lab = await makeMiniLab(app);
  device = createSimulatedDevice({
    url: app.url,
    key: lab.deviceKey,
    rig: { code: 'heron-8', revision: 1 },
    channels: channelNames(8),
    humanDelayMs: [20, 40],
    // Away for so long that the page can be seen saying so.
    reconnectMs: [2500, 3500],
    seed: 7,
    // The first run is long enough to be stopped by hand; slack again and again, so that some is always on the moving page.
    source: (n) => simulateRun({
      rig: heron, task: 'pick-and-place', durationS: n === 0 ? 90 : 2, seed: 11 + n, rateHz: 1000, chunkSamples: 25,
      troubles: n === 0 ? Array.from({ length: 20 }, (_, i) => ({ kind: 'slack' as const, atS: 1.5 + 4 * i, durationS: 0.3, cable: 4 })) : [],
    }),
  });
  [operator, lead] = await Promise.all([visitor(browser, { expected: notSignedInYet }), visitor(browser, { colorScheme: 'dark', expected: notSignedInYet })]);
});

afterAll(async () => {
  await device?.close(0);
  await browser?.close();
  await app?.close();
});

async function signIn(page: Page, person: { email: string }, to: string): Promise<void> {
  await page.goto(`${app.url}${to}`);
  await page.getByLabel('E-mail').fill(person.email);
  await page.getByLabel('Password', { exact: true }).fill(testPassword);
  await page.getByRole('button', { name: 'Sign in', exact: true }).click();
  await page.waitForURL(`${app.url}${to}`);
}

const desk = () => operator.page.getByRole('region', { name: 'Desk' });
const elapsed = async () => {
  const [minutes = '', seconds = ''] = ((await operator.page.getByTestId('elapsed').textContent()) ?? '').split(':');
  return Number(minutes) * 60 + Number(seconds);
};
const elapsedIsBeyond = (seconds: number) => expect.poll(elapsed, { timeout: 20_000 }).toBeGreaterThan(seconds);
const screenshot = (page: Page, name: string) => page.screenshot({ path: fileURLToPath(new URL(`../../.screens/${name}.png`, import.meta.url)) });

describe.sequential('a trial', () => {
  test('cannot be armed while its device is not connected; once it is, the page says so by itself', async () => {
    const { page } = operator;
    await signIn(page, lab.people.operator, `/sessions/${lab.sessionId}/run`);
    await desk().getByText('Switch the device on').waitFor();
    expect(await desk().getByRole('button', { name: 'Arm trial 1' }).isDisabled()).toBe(true);
    await device.connect();
    await expect.poll(() => desk().getByRole('button', { name: 'Arm trial 1' }).isEnabled()).toBe(true);
    expect(await seriousFindings(page)).toEqual([]);
  });

  test('is armed, and what the device streams shows as it comes, flags too', async () => {
    const { page } = operator;
    await desk().getByRole('button', { name: 'Arm trial 1' }).click();
    await desk().getByRole('button', { name: 'Stop the trial' }).waitFor();
    await elapsedIsBeyond(2.2);
    // The device's script: cable 4 hangs slack from 1.5 s on.
    const slack = desk().getByRole('listitem').filter({ hasText: 'Slack, cable 4' }).last();
    await slack.waitFor();
    expect(await slack.textContent()).toMatch(/^0:01\.[56]/);
    // The newest sample that is painted is one that the recorder has.
    const paintedS = Number(await page.getByTestId('live-stave').getAttribute('data-painted-s'));
    expect(paintedS).toBeGreaterThan(2);
    expect(await seriousFindings(page)).toEqual([]);
    await screenshot(page, 'run-light');
  });

  test('shows going on after a reload in its middle, with the seconds before it', async () => {
    const { page } = operator;
    const before = await elapsed();
    await page.reload();
    await desk().getByRole('button', { name: 'Stop the trial' }).waitFor();
    await elapsedIsBeyond(before);
    await slackIsDrawn(page);
  });

  test('says that the device is away while its link is down, and goes on when it is back', async () => {
    device.breakLink();
    const now = desk().getByRole('region', { name: 'Now' });
    await now.getByText('device away').waitFor();
    await now.getByText('recording', { exact: true }).waitFor();
    await elapsedIsBeyond((await elapsed()) + 0.5);
  });

  test('is stopped by the operator, who gives it an outcome with a reason', async () => {
    const { page } = operator;
    await desk().getByRole('button', { name: 'Stop the trial' }).click();
    await desk().getByRole('button', { name: 'Keep the outcome' }).waitFor();
    await desk().getByText('aborted', { exact: true }).click();
    await desk().getByRole('button', { name: 'Keep the outcome' }).click();
    await desk().getByText('Say why: others will ask').waitFor();
    await desk().getByLabel('Reason').fill('The cable was to be looked at.');
    await desk().getByRole('button', { name: 'Keep the outcome' }).click();
    await desk().getByRole('heading', { name: 'Trial 2 of 3' }).waitFor();
    const { body } = await (await app.signedIn(lab.people.operator)).get<{ state: string; outcome: string; recording: { samples: number; gaps: unknown[]; endReason: string } }>(`/api/trials/${lab.trialIds[0]}`);
    expect(body).toMatchObject({ state: 'judged', outcome: 'aborted', recording: { gaps: [], endReason: 'stopped' } });
    expect(body.recording.samples).toBe(device.report().runs[0]?.samples);
    expect(operator.complaints).toEqual([]);
    expect(await seriousFindings(page)).toEqual([]);
  });

  test('is replayed by the operator, whose note appears before the lead without a reload; the lead answers', async () => {
    const { page } = operator;
    await signIn(lead.page, lab.people.lead, `/trials/${lab.trialIds[0]}`);
    await desk().getByRole('link', { name: 'Pick and place' }).first().click();
    await page.getByTestId('margin-margin').getByText('Slack, cable 4').first().waitFor();
    await lead.page.getByTestId('margin-margin').getByText('Slack, cable 4').first().waitFor();

    await page.getByRole('button', { name: 'next flag' }).click();
    await page.getByRole('button', { name: /^Write a note/ }).click();
    const form = page.getByRole('region', { name: 'New note' });
    await form.getByRole('textbox').fill('The cable hung slack while the block was lifted.');
    await form.getByRole('button', { name: 'Cable 4' }).click();
    await form.getByRole('button', { name: 'Write it down' }).click();
    const entry = lead.page.getByTestId('margin-margin').getByRole('listitem').filter({ hasText: 'The cable hung slack while the block was lifted.' });
    await entry.waitFor();

    await entry.getByRole('button', { name: 'Reply' }).click();
    await entry.getByRole('textbox').fill('Then the pretension was too low.');
    await entry.getByRole('textbox').press('Control+Enter');
    await page.getByText('Then the pretension was too low.').waitFor();
    expect(lead.complaints).toEqual([]);
    for (const { page: each } of [operator, lead]) expect(await seriousFindings(each)).toEqual([]);
    await Promise.all([screenshot(page, 'trial-operator'), screenshot(lead.page, 'trial-lead-dark')]);
  });

  test('is run by keyboard alone: arm, wait for its end, outcome, next', async () => {
    const { page } = operator;
    await page.goto(`${app.url}/sessions/${lab.sessionId}/run`);
    const arm = desk().getByRole('button', { name: 'Arm trial 2' });
    await expect.poll(() => arm.isEnabled()).toBe(true);
    await arm.focus();
    await page.keyboard.press('Enter');
    // The device's second run lasts two seconds and ends by itself.
    const keep = desk().getByRole('button', { name: 'Keep the outcome' });
    await keep.waitFor();
    await desk().getByRole('radio', { name: 'completed' }).focus();
    await page.keyboard.press('Enter');
    await desk().getByRole('heading', { name: 'Trial 3 of 3' }).waitFor();
  });
});

/** The strings before the reload were read from the book: where the slack was, blue is painted. */
async function slackIsDrawn(page: Page): Promise<void> {
  await expect.poll(() => page.getByTestId('live-stave').locator('canvas').first().evaluate((canvas: HTMLCanvasElement) => {
    const context = canvas.getContext('2d');
    if (!context) return 0;
    const { data } = context.getImageData(0, 0, canvas.width, canvas.height);
    let blue = 0;
    // The slack role's tone, #0072b2, within the smoothing of edges.
    for (let i = 0; i < data.length; i += 4) if ((data[i] ?? 0) < 40 && Math.abs((data[i + 1] ?? 0) - 0x72) < 20 && Math.abs((data[i + 2] ?? 0) - 0xb2) < 20 && (data[i + 3] ?? 0) > 200) blue += 1;
    return blue;
  })).toBeGreaterThan(20);
}

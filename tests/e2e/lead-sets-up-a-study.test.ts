/** The experiment lead's main things, at the browser: a study with its people, a session to run, a rig in three dimensions. */
import { readFileSync } from 'node:fs';
import type { Browser, Page } from 'playwright-core';
import { afterAll, beforeAll, describe, expect, test } from 'vitest';
import { heronFile } from '../support/app';
import { launchBrowser, type Visitor } from '../support/browser';
import { type DemoHouse, openDemoHouse, signInByForm } from './support/demo-lab';
import { coloursOf } from './support/looking';
import { looksRight } from './support/showing';
import { cast, demoPassword } from '@server/db/seed/cast';

let house: DemoHouse;
let browser: Browser;
let lead: Visitor;

beforeAll(async () => {
  [house, browser] = await Promise.all([openDemoHouse(), launchBrowser()]);
  lead = await house.enter(browser, 'lead');
});

afterAll(async () => {
  await browser?.close();
  await house?.close();
});

const dialog = (page: Page) => page.getByRole('dialog');

describe.sequential('the experiment lead', () => {
  test('starts a study; what is missing is said beside its field and nothing typed is lost', async () => {
    const { page } = lead;
    await page.goto('/studies');
    await page.getByRole('link', { name: 'Start a study' }).click();
    await page.getByLabel('Title', { exact: true }).fill('Kestrel: reaching with and without a cue');
    await page.getByRole('button', { name: 'Start the study' }).click();
    await page.getByLabel('Code', { exact: true }).and(page.locator('[aria-invalid="true"]')).waitFor();
    await looksRight(page, 'study-missing');
    expect(await page.getByLabel('Title', { exact: true }).inputValue()).toBe('Kestrel: reaching with and without a cue');
    await page.getByLabel('Code', { exact: true }).fill('KESTREL');
    await page.getByLabel('Protocol').fill('Twelve reaches, half of them with a cue.');
    await page.getByLabel('Label of condition 1').fill('With cue');
    await page.getByRole('button', { name: 'Add a condition' }).click();
    await page.getByLabel('Label of condition 2').fill('Without cue');
    await page.getByLabel('Title of task 1').fill('Reach to shown targets');
    await page.getByLabel('Time limit, s, of task 1').fill('45');
    await looksRight(page, 'study-filled');
    await page.getByRole('button', { name: 'Start the study' }).click();
    await page.getByRole('heading', { level: 1, name: 'Kestrel: reaching with and without a cue' }).waitFor();
    await page.getByRole('row', { name: /Reach to shown targets.*45\.0\ss/ }).waitFor();
  });

  test('adds members, one of them blind, and participants under codes', async () => {
    const { page } = lead;
    await page.getByRole('button', { name: 'Add a member' }).click();
    await dialog(page).getByLabel('Person').selectOption({ label: 'Priya Sundermoor, operator' });
    await dialog(page).getByLabel('Blind to conditions').check();
    await looksRight(page, 'add-member');
    await dialog(page).getByRole('button', { name: 'Add the member' }).click();
    await page.getByRole('row', { name: /Priya Sundermoor.*operator.*sees codes alone/ }).waitFor();

    await page.getByRole('button', { name: 'Add a participant' }).click();
    await dialog(page).getByLabel('Code').fill('Ines from next door');
    await dialog(page).getByRole('button', { name: 'Add the participant' }).click();
    await dialog(page).locator('[aria-invalid="true"]').waitFor();
    await looksRight(page, 'add-participant-refused');
    await dialog(page).getByLabel('Code').fill('KE-01');
    await dialog(page).getByRole('button', { name: 'Add the participant' }).click();
    await page.getByRole('row', { name: /KE-01.*right hand/ }).waitFor();
    await page.getByRole('button', { name: 'Begin the study' }).click();
    await dialog(page).getByRole('button', { name: 'Begin the study' }).click();
    await page.getByText('running', { exact: true }).waitFor();
    await looksRight(page, 'study-begun');
  });

  test('plans a session that the blind operator then sees by codes alone', async () => {
    const { page } = lead;
    await page.getByRole('link', { name: 'Plan a session' }).first().click();
    await page.getByRole('button', { name: 'Plan the session' }).click();
    await page.getByText('Choose who comes').waitFor();
    await page.getByLabel('Participant').selectOption({ label: 'KE-01, visit 1' });
    await page.getByLabel('Rig', { exact: true }).selectOption({ label: 'Heron, eight cables, two sliding jaws, revision 2' });
    await page.getByLabel('Times each').fill('2');
    await page.getByRole('button', { name: 'Add every task under every condition (4)' }).click();
    await page.getByRole('button', { name: 'Take out trial 4' }).click();
    await looksRight(page, 'plan-filled');
    await page.getByRole('button', { name: 'Plan the session' }).click();
    await page.getByRole('heading', { level: 1, name: 'Participant KE-01, first visit' }).waitFor();
    expect(await page.getByRole('table', { name: 'Trials of this session' }).getByRole('row').count()).toBe(1 + 3);
    await page.getByText('With cue', { exact: true }).first().waitFor();
    const address = page.url();

    const blind = await house.enter(browser, 'secondOperator');
    await blind.page.goto(address);
    await blind.page.getByText('condition A', { exact: true }).first().waitFor();
    expect(await blind.page.content()).not.toContain('With cue');
    expect(blind.complaints).toEqual([]);
    await blind.context.close();
  });

  test('imports a rig file: faults are named by their place, a sound file becomes the next revision, seen in three dimensions', async () => {
    const { page } = lead;
    await page.goto('/rigs');
    await page.getByRole('link', { name: 'Import a rig file' }).click();
    const broken = structuredClone(heronFile) as { cables: { exit: number[] }[] };
    broken.cables[8 - 1]!.exit = [0.3, 0.3];
    const choose = (name: string, file: unknown) => page.getByLabel('Rig file', { exact: true }).setInputFiles({ name, mimeType: 'application/json', buffer: Buffer.from(JSON.stringify(file)) });
    await choose('heron-broken.json', broken);
    await page.getByText('exit of cable 8 needs at least 3 entries.').waitFor();
    await looksRight(page, 'rig-faulty');

    const moved = structuredClone(heronFile) as { cables: { exit: number[] }[] };
    moved.cables[0]!.exit[2]! += 0.002;
    await choose('heron-8.json', moved);
    await page.getByText('It becomes revision 3 of heron-8').waitFor();
    await page.getByLabel('Remark').fill('Exit of cable 1 raised by 2 mm.');
    await looksRight(page, 'rig-sound');
    await page.getByRole('button', { name: 'Import revision 3' }).click();
    await page.getByText('revision 3 of 3').waitFor();
    await page.getByRole('row', { name: /Revision 3.*Exit of cable 1 raised by 2 mm.*Tamsin Quillby/ }).waitFor();
    await page.getByRole('row', { name: /^1\s+320\.0, −295\.0, −278\.0/ }).waitFor();

    // Something stands in the scene, and another stand shows something else.
    const scene = page.getByTestId('scene');
    await expect.poll(() => coloursOf(scene)).toBeGreaterThan(20);
    const free = await scene.screenshot();
    await page.getByRole('button', { name: 'Top', exact: true }).click();
    await expect.poll(async () => (await scene.screenshot()).equals(free)).toBe(false);
    await looksRight(page, 'rig-top');

    // Revisions stay as they were.
    await page.getByRole('button', { name: 'Revision 2' }).click();
    await page.getByRole('row', { name: /^1\s+320\.0, −295\.0, −280\.0/ }).waitFor();
    expect(lead.complaints).toEqual([]);
  });

  test('takes a member out, who then no longer finds the study', async () => {
    const { page } = lead;
    await page.goto('/studies');
    await page.getByRole('link', { name: /^Kestrel/ }).click();
    await page.getByRole('heading', { level: 1 }).waitFor();
    const address = page.url();
    const operator = await house.enter(browser, 'secondOperator', { expected: /404/ });
    await operator.page.goto(address);
    await operator.page.getByRole('heading', { level: 1, name: /^Kestrel/ }).waitFor();
    await page.getByRole('row', { name: /Priya Sundermoor/ }).getByRole('button', { name: 'Take out' }).click();
    await looksRight(page, 'member-out');
    await dialog(page).getByRole('button', { name: 'Take out of the study' }).click();
    await page.getByRole('row', { name: /Priya Sundermoor/ }).waitFor({ state: 'detached' });
    await operator.page.reload();
    await operator.page.getByRole('heading', { name: 'No such page' }).waitFor();
    await operator.context.close();
  });
});

test('a sample rig from the repository can be imported as it is', async () => {
  const { page } = lead;
  await page.goto('/rigs/import');
  await page.getByLabel('The file’s text').fill(readFileSync(new URL('../../samples/rigs/wren-8.json', import.meta.url), 'utf8'));
  await page.getByText('Wren, eight cables, two hinged jaws: 8 cables, sound.').waitFor();
});

test('signing in leads back to the page that was asked for', async () => {
  const context = await browser.newContext({ baseURL: house.url });
  const page = await context.newPage();
  await page.goto('/rigs/import');
  await signInByForm(page, cast.lead.email, demoPassword);
  await page.getByRole('heading', { name: 'Import a rig file' }).waitFor();
  await context.close();
});

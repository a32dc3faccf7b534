/** The operator's own reading, at the browser: from Today to a session to a trial, along the stave, a note on a span, an answer. */
import type { Browser, Page } from 'playwright-core';
import { afterAll, beforeAll, describe, expect, test } from 'vitest';
import type { Note } from '@shared/api/notes';
import { cast, demoPassword } from '@server/db/seed/cast';
import { launchBrowser, type Visitor, visitor } from '../support/browser';
import { type DemoHouse, openDemoHouse, signInByForm } from './support/demo-lab';
import { labAddresses, type LabAddresses } from './support/lab-addresses';
import { coloursOf, settled } from './support/looking';
import { looksRight } from './support/showing';

let house: DemoHouse;
let browser: Browser;
let at: LabAddresses;
let operator: Visitor;
let colleague: Visitor;

beforeAll(async () => {
  [house, browser] = await Promise.all([openDemoHouse(), launchBrowser()]);
  at = await labAddresses(house);
  operator = await visitor(browser, { baseURL: house.url, expected: /401 \(Unauthorized\)/ });
  colleague = await house.enter(browser, 'secondOperator', { colorScheme: 'dark' });
});

afterAll(async () => {
  await browser?.close();
  await house?.close();
});

const position = async (page: Page) => {
  const [minutes = '', seconds = ''] = ((await page.getByTestId('position').textContent()) ?? '').split(':');
  return Number(minutes) * 60 + Number(seconds);
};
const margin = (page: Page) => page.getByTestId('margin-margin');
const words = 'The hand waits here before each reach; the screen was turned off in between.';

describe.sequential('the operator', () => {
  test('signs in, finds today’s sessions, opens one and a recorded trial of it', async () => {
    const { page } = operator;
    await page.goto('/');
    await signInByForm(page, cast.operator.email, demoPassword);
    const sessions = page.getByRole('table', { name: 'Sessions planned or open' });
    await sessions.getByRole('row', { name: /SG-06, first visit.*0 of 4.*planned/ }).waitFor();
    await sessions.getByRole('link', { name: 'SG-05, first visit' }).click();
    await page.getByRole('heading', { level: 1, name: 'Participant SG-05, first visit' }).waitFor();
    await page.getByRole('row', { name: /Trial 2.*needs an outcome/ }).waitFor();
    await page.getByRole('link', { name: 'Trial 1, Pick a block and place it' }).click();
    await page.getByRole('heading', { level: 1, name: 'Trial 1 of 4, Pick a block and place it' }).waitFor();
    await settled(page);
    await expect.poll(() => coloursOf(page.getByTestId('scene'))).toBeGreaterThan(20);
    await expect.poll(() => coloursOf(page.getByTestId('stave'))).toBeGreaterThan(20);
    await looksRight(page, 'trial-opened');
  });

  test('plays it, stops it, and goes from flag to flag by keyboard', async () => {
    const { page } = operator;
    const { body: { flags } } = await (await house.client('operator')).get<{ flags: { startS: number }[] }>(new URL(page.url()).pathname.replace('/trials/', '/api/trials/') + '/flags');
    expect(flags.length).toBeGreaterThan(2);
    await page.keyboard.press('Space');
    await expect.poll(() => position(page)).toBeGreaterThan(0.3);
    await page.getByRole('button', { name: 'Pause' }).waitFor();
    await page.keyboard.press('Space');
    await page.getByRole('button', { name: 'Play' }).waitFor();
    await page.keyboard.press('Home');
    for (const flag of flags.slice(0, 2)) {
      await page.keyboard.press('f');
      await expect.poll(() => position(page)).toBeCloseTo(flag.startS, 2);
    }
    await looksRight(page, 'trial-at-flag');
    await page.keyboard.press('?');
    await page.getByRole('dialog').getByText('play or pause').waitFor();
    await looksRight(page, 'trial-keys');
    await page.keyboard.press('Escape');
    await page.keyboard.press('t');
    await page.getByRole('table').first().waitFor();
    await looksRight(page, 'trial-table');
    await page.keyboard.press('t');
    await page.getByTestId('scene').waitFor();
  });

  test('drags a span on the stave and writes a note on it, which the colleague who reads along sees appear', async () => {
    const { page } = operator;
    await colleague.page.goto(new URL(page.url()).pathname);
    await page.getByRole('list', { name: 'Reading together' }).getByText('Priya Sundermoor').waitFor();
    await page.keyboard.press('0');
    const box = await page.getByTestId('stave').boundingBox();
    if (!box) throw new Error('The stave has no place');
    await page.keyboard.down('Shift');
    await page.mouse.move(box.x + box.width * 0.4, box.y + box.height * 0.3);
    await page.mouse.down();
    await page.mouse.move(box.x + box.width * 0.5, box.y + box.height * 0.3, { steps: 5 });
    await page.mouse.up();
    await page.keyboard.up('Shift');
    await page.getByRole('button', { name: 'note on it' }).click();
    const form = page.getByRole('region', { name: 'New note' });
    const before = await position(page);
    await form.getByRole('textbox').pressSequentially(words);
    // Letters that are keys of the player are letters here.
    expect(await position(page)).toBe(before);
    await form.getByRole('button', { name: 'Cable 2', exact: true }).click();
    await form.getByRole('button', { name: 'Cable 7', exact: true }).click();
    await looksRight(page, 'note-writing');
    await form.getByRole('button', { name: 'Write it down' }).click();
    await margin(colleague.page).getByRole('listitem').filter({ hasText: words }).getByText('cables 2, 7').waitFor();

    const { body } = await (await house.client('operator')).get<{ notes: Note[] }>(`/api${new URL(page.url()).pathname}/notes`);
    const note = body.notes.find(({ text }) => text === words);
    const { durationS } = (await (await house.client('operator')).get<{ recording: { durationS: number } }>(`/api${new URL(page.url()).pathname}`)).body.recording;
    expect(note).toMatchObject({ cables: [2, 7], mine: true });
    // A tenth of the stave's width, which the gutter makes somewhat more than a tenth of the recording.
    expect((note?.endS ?? 0) - (note?.startS ?? 0)).toBeGreaterThan(durationS * 0.09);
    expect((note?.endS ?? 0) - (note?.startS ?? 0)).toBeLessThan(durationS * 0.14);
  });

  test('is answered, corrects the note as a new version, and resolves it', async () => {
    const { page } = operator;
    const theirs = margin(colleague.page).getByRole('listitem').filter({ hasText: words });
    await theirs.getByRole('button', { name: /^Reply/ }).click();
    await theirs.getByRole('textbox').fill('Then it is the protocol’s pause, not the participant.');
    await theirs.getByRole('textbox').press('Control+Enter');
    const mine = margin(page).getByRole('listitem').filter({ hasText: 'Then it is the protocol’s pause' }).first();
    await mine.waitFor();
    await mine.getByRole('button', { name: 'Edit this note' }).click();
    await mine.getByRole('textbox').fill(`${words} Two minutes each.`);
    await mine.getByRole('button', { name: 'Keep as a new version' }).click();
    await margin(colleague.page).getByText('Two minutes each.').waitFor();
    await mine.getByRole('button', { name: 'version 2' }).click();
    await page.getByRole('dialog', { name: 'Versions' }).getByText(words, { exact: true }).waitFor();
    await looksRight(page, 'note-versions');
    await page.keyboard.press('Escape');
    await mine.getByRole('button', { name: 'Resolve this note' }).click();
    await margin(colleague.page).getByRole('listitem').filter({ hasText: 'Two minutes each.' }).getByText('resolved', { exact: true }).waitFor();
    await looksRight(colleague.page, 'trial-colleague-dark');
    for (const { complaints } of [operator, colleague]) expect(complaints).toEqual([]);
  });

  test('hands a link on that opens the same span', async () => {
    const { page } = operator;
    await page.goto(`/trials/${at.richTrial}?at=7.600&from=7.400&to=8.200`);
    await page.getByText('span 0:07.40–0:08.20').waitFor();
    expect(await position(page)).toBeCloseTo(7.6, 3);
    await page.goto(`/trials/${at.richTrial}?at=9000`);
    await page.getByText(/not in this recording|outside|beyond/i).first().waitFor();
    await looksRight(page, 'trial-outside');
  });

  test('gives the outcome that is still missing, with a reason where one is needed', async () => {
    const { page } = operator;
    await page.goto('/');
    await page.getByRole('button', { name: 'Give outcome of trial 2, SG-05' }).click();
    const dialog = page.getByRole('dialog', { name: 'Outcome of trial 2' });
    await dialog.getByRole('radio', { name: /void/ }).check();
    await dialog.getByRole('button', { name: 'Keep the outcome' }).click();
    await dialog.getByText('Say why: others will ask').waitFor();
    await looksRight(page, 'outcome');
    await dialog.getByRole('radio', { name: /completed/ }).check();
    await dialog.getByRole('button', { name: 'Keep the outcome' }).click();
    await dialog.waitFor({ state: 'detached' });
    await page.getByText('Trials without an outcome').waitFor({ state: 'detached' });
    await page.goto(`/sessions/${at.openSession}/log`);
    await page.getByRole('row', { name: /Jonas Fadenholt.*outcome given.*trial\s*2.*completed/ }).waitFor();
    await page.getByText('The chain holds.').waitFor();
  });

  test('prints the log on paper without the bar and the buttons', async () => {
    const { page } = operator;
    await page.emulateMedia({ media: 'print' });
    expect(await page.getByRole('button', { name: 'Print' }).isVisible()).toBe(false);
    expect(await page.getByText('The chain holds.').isVisible()).toBe(true);
    await looksRight(page, 'log-print');
    await page.emulateMedia({ media: null });
    expect(operator.complaints).toEqual([]);
  });
});

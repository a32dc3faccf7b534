/** Coming in and going out: wrong password, reset by mail, sign-ins listed and ended, a sign-in that ends in the middle of writing, the first opening. */
import type { Browser, Page } from 'playwright-core';
import { eq } from 'drizzle-orm';
import { afterAll, beforeAll, describe, expect, test } from 'vitest';
import { fileURLToPath } from 'node:url';
import { people, signIns } from '@server/db/schema';
import { cast, type CastName, demoPassword } from '@server/db/seed/cast';
import type { Note } from '@shared/api/notes';
import { startApp } from '../support/app';
import { launchBrowser, visitor } from '../support/browser';
import { type DemoHouse, openDemoHouse, signInByForm } from './support/demo-lab';
import { labAddresses, type LabAddresses } from './support/lab-addresses';
import { looksRight } from './support/showing';

let house: DemoHouse;
let browser: Browser;
let at: LabAddresses;

/** Not signed in is an answer here, and the browser prints it in red. */
const expected = /status of 401/;

beforeAll(async () => {
  [house, browser] = await Promise.all([openDemoHouse(), launchBrowser()]);
  at = await labAddresses(house);
});

afterAll(async () => {
  await browser?.close();
  await house?.close();
});

const stranger = () => visitor(browser, { baseURL: house.url, expected });
const today = (page: Page) => page.getByRole('heading', { level: 1, name: 'Today' }).waitFor();
const account = (page: Page, name: string) => page.getByRole('button', { name: new RegExp(`^${name}`) });

/** The time of somebody's sign-ins has run out. */
async function runOut(who: CastName): Promise<void> {
  const [person] = await house.open.db.select({ id: people.id }).from(people).where(eq(people.email, cast[who].email));
  await house.open.db.update(signIns).set({ expiresAt: new Date(Date.now() - 1000) }).where(eq(signIns.userId, person!.id));
}

describe('a sign-in', () => {
  test('with a wrong password is refused in words, and what was typed stays', async () => {
    const { page, context, complaints } = await stranger();
    await page.goto('/');
    await page.waitForURL('/sign-in');
    await page.getByRole('button', { name: 'Sign in', exact: true }).click();
    await page.getByText('Write your password').waitFor();
    await signInByForm(page, cast.operator.email, 'not the password');
    await page.getByRole('alert').getByText('E-mail and password do not fit together.').waitFor();
    expect(await page.getByLabel('E-mail').inputValue()).toBe(cast.operator.email);
    await looksRight(page, 'wrong-password');
    await signInByForm(page, cast.operator.email, demoPassword);
    await today(page);
    expect(complaints).toEqual([]);
    await context.close();
  });

  test('ends at sign-out: the pages are closed and going back shows nothing of them', async () => {
    const { page, context } = await stranger();
    await page.goto('/studies');
    await signInByForm(page, cast.operator.email, demoPassword);
    await page.getByRole('link', { name: /^Sedge/ }).waitFor();
    await account(page, 'Jonas Fadenholt').click();
    await looksRight(page, 'account-menu');
    await page.getByRole('menuitem', { name: 'Sign out' }).click();
    await page.waitForURL('/sign-in');
    await page.goBack();
    await page.getByRole('heading', { level: 1, name: 'Sign in' }).waitFor();
    expect(await page.content()).not.toContain('Sedge');
    await context.close();
  });

  test('that runs out in the middle of writing costs no word: sign in over the page, send once more, it stands there once', async () => {
    const { page, complaints } = await house.enter(browser, 'lead', { expected });
    await page.goto(`/trials/${at.richTrial}`);
    await page.getByRole('button', { name: /^Write a note/ }).click();
    const form = page.getByRole('region', { name: 'New note' });
    const words = 'Written while the sign-in ran out, and not lost.';
    await form.getByRole('textbox').fill(words);
    await runOut('lead');
    await form.getByRole('button', { name: 'Write it down' }).click();
    const dialog = page.getByRole('dialog', { name: 'Your sign-in has ended' });
    await dialog.waitFor();
    await looksRight(page, 'sign-in-ended');
    expect(await dialog.getByLabel('Password').evaluate((field) => field === document.activeElement)).toBe(true);
    expect(await dialog.getByLabel('E-mail').inputValue()).toBe(cast.lead.email);
    await dialog.getByLabel('Password').fill(demoPassword);
    await dialog.getByRole('button', { name: 'Sign in' }).click();
    await dialog.waitFor({ state: 'detached' });
    expect(await form.getByRole('textbox').inputValue()).toBe(words);
    await form.getByRole('button', { name: 'Write it down' }).click();
    await page.getByTestId('margin-margin').locator('p').filter({ hasText: words }).waitFor();
    const { body } = await (await house.client('lead')).get<{ notes: Note[] }>(`/api/trials/${at.richTrial}/notes`);
    expect(body.notes.filter(({ text }) => text === words)).toHaveLength(1);
    expect(complaints).toEqual([]);
    await page.context().close();
  });

  test('that runs out keeps the draft through a reload too; somebody else who signs in there sees nothing of the page', async () => {
    const { page } = await house.enter(browser, 'lead', { expected });
    await page.goto(`/trials/${at.richTrial}`);
    await page.getByRole('button', { name: /^Write a note/ }).click();
    await page.getByRole('region', { name: 'New note' }).getByRole('textbox').fill('Half a sentence');
    await page.reload();
    await page.getByRole('button', { name: /^Write a note/ }).click();
    expect(await page.getByRole('region', { name: 'New note' }).getByRole('textbox').inputValue()).toBe('Half a sentence');
    await runOut('lead');
    await page.getByRole('button', { name: 'Write it down' }).click();
    const dialog = page.getByRole('dialog', { name: 'Your sign-in has ended' });
    await dialog.getByLabel('E-mail').fill(cast.operator.email);
    await dialog.getByLabel('Password').fill(demoPassword);
    await dialog.getByRole('button', { name: 'Sign in' }).click();
    await today(page);
    await page.goto(`/trials/${at.richTrial}`);
    await page.getByRole('button', { name: /^Write a note/ }).click();
    expect(await page.getByRole('region', { name: 'New note' }).getByRole('textbox').inputValue()).toBe('');
    await page.context().close();
  });
});

describe('one’s sign-ins', () => {
  test('are listed, and one of them can be ended from another browser', async () => {
    const [here, there] = [await stranger(), await stranger()];
    for (const { page } of [there, here]) {
      await page.goto('/account');
      await signInByForm(page, cast.secondOperator.email, demoPassword);
      await page.getByRole('table', { name: 'Your sign-ins' }).getByText('here', { exact: true }).waitFor();
    }
    const list = here.page.getByRole('table', { name: 'Your sign-ins' });
    await list.getByRole('row', { name: /Chrome on Linux.*here/ }).waitFor();
    await looksRight(here.page, 'sign-ins');
    const others = list.getByRole('row').filter({ has: here.page.getByRole('button', { name: /^End/ }) });
    expect(await others.count()).toBe(1);
    await others.getByRole('button', { name: /^End/ }).click();
    await others.waitFor({ state: 'detached' });
    await there.page.getByRole('link', { name: 'Studies' }).click();
    await there.page.getByRole('dialog', { name: 'Your sign-in has ended' }).waitFor();
    await here.page.reload();
    await list.getByText('here', { exact: true }).waitFor();
    await Promise.all([here.context.close(), there.context.close()]);
  });
});

describe('a forgotten password', () => {
  test('is replaced by the link in the mail, once; the old one and all sign-ins with it end', async () => {
    const signedIn = await house.enter(browser, 'secondOperator', { expected });
    await signedIn.page.goto('/account');
    await signedIn.page.getByRole('heading', { name: 'Account' }).waitFor();

    const { page, context, complaints } = await visitor(browser, { baseURL: house.url, expected: /status of (400|401)/ });
    await page.goto('/sign-in');
    await page.getByRole('link', { name: 'Forgot the password' }).click();
    await page.getByLabel('E-mail').fill(cast.secondOperator.email);
    await page.getByRole('button', { name: 'Send the link' }).click();
    await page.getByText('If this address belongs to somebody in the lab').waitFor();
    await looksRight(page, 'forgot-sent');

    const administrator = await house.enter(browser, 'administrator');
    await administrator.page.goto('/outbox');
    await administrator.page.getByRole('heading', { level: 2, name: 'Choose a new Tautbook password' }).waitFor();
    await looksRight(administrator.page, 'outbox');
    const link = (await administrator.page.getByRole('article').getByRole('link').getAttribute('href')) ?? '';

    await page.goto(link);
    await page.getByLabel('New password').fill('slow boats in fog');
    await page.getByLabel('The same again').fill('slow boats in fog');
    await page.getByRole('button', { name: 'Set the password' }).click();
    await page.getByText('The new password holds').waitFor();
    await looksRight(page, 'reset-done');
    await signInByForm(page, cast.secondOperator.email, demoPassword);
    await page.getByText('E-mail and password do not fit together.').waitFor();
    await signInByForm(page, cast.secondOperator.email, 'slow boats in fog');
    await today(page);

    await signedIn.page.reload();
    await signedIn.page.getByRole('heading', { level: 1, name: 'Sign in' }).waitFor();

    await page.goto(link);
    await page.getByLabel('New password').fill('slow boats in sun');
    await page.getByLabel('The same again').fill('slow boats in sun');
    await page.getByRole('button', { name: 'Set the password' }).click();
    await page.getByRole('alert').getByText('This link has been used or is too old.').waitFor();
    expect(complaints).toEqual([]);
    await Promise.all([context.close(), signedIn.context.close(), administrator.context.close()]);
  });
});

test('the first opening asks for the code on the console and makes the administrator, once', async () => {
  const app = await startApp({ clientDirectory: fileURLToPath(new URL('../../dist/client', import.meta.url)) });
  const code = (await app.book.setupCode()) ?? '';
  const { page, context, complaints } = await visitor(browser, { baseURL: app.url, expected: /status of (401|403|422)/ });
  await page.goto('/');
  await page.getByRole('heading', { level: 1, name: 'First opening' }).waitFor();
  await page.getByLabel('One-time code').fill('not-the-code');
  await page.getByLabel('Name').fill('Odo Marlestone');
  await page.getByLabel('E-mail').fill('odo.marlestone@lab.example');
  await page.getByLabel('Password').fill('nine bells at dusk');
  await page.getByRole('button', { name: 'Open the book' }).click();
  await page.getByRole('alert').waitFor();
  await looksRight(page, 'first-opening');
  await page.getByLabel('One-time code').fill(code);
  await page.getByRole('button', { name: 'Open the book' }).click();
  await today(page);
  await page.getByText('You alone. Invite an experiment lead').waitFor();
  await looksRight(page, 'first-today');
  await page.goto('/setup');
  await page.waitForURL(/\/(sign-in)?$/);
  expect(complaints).toEqual([]);
  await context.close();
  await app.close();
}, 120_000);

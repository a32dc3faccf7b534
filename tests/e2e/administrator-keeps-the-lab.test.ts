/** The administrator's main things, at the browser: inviting a person, handing out a device's key and taking it back. */
import type { Browser } from 'playwright-core';
import { afterAll, beforeAll, describe, expect, test } from 'vitest';
import { BenchDevice } from '../support/bench-device';
import { launchBrowser, type Visitor, visitor } from '../support/browser';
import { type DemoHouse, openDemoHouse, signInByForm } from './support/demo-lab';
import { looksRight } from './support/showing';

let house: DemoHouse;
let browser: Browser;
let administrator: Visitor;

beforeAll(async () => {
  [house, browser] = await Promise.all([openDemoHouse(), launchBrowser()]);
  administrator = await house.enter(browser, 'administrator');
});

afterAll(async () => {
  await browser?.close();
  await house?.close();
});

describe.sequential('the administrator', () => {
  test('invites a person, who sets a password by the link in the mail and comes in with the given role', async () => {
    const { page } = administrator;
    await page.goto('/people');
    await page.getByRole('button', { name: 'Invite a person' }).click();
    const dialog = page.getByRole('dialog');
    await dialog.getByRole('button', { name: 'Send the invitation' }).click();
    await dialog.getByText('This is no e-mail address').waitFor();
    await dialog.getByLabel('Name').fill('Runa Ashgrove');
    await dialog.getByLabel('E-mail').fill('runa.ashgrove@tautbook.example');
    await dialog.getByLabel('Role in the lab').selectOption({ label: 'clinician' });
    await looksRight(page, 'invite');
    await dialog.getByRole('button', { name: 'Send the invitation' }).click();
    await page.getByRole('dialog', { name: 'Runa Ashgrove is invited' }).waitFor();
    await looksRight(page, 'invited');
    await page.getByRole('link', { name: 'the mail of this book' }).click();
    const link = await page.getByRole('article').getByRole('link').getAttribute('href');

    const invited = await visitor(browser, { baseURL: house.url, expected: /401 \(Unauthorized\)/ });
    await invited.page.goto(link ?? '');
    await invited.page.getByLabel('New password').fill('three quiet herons');
    await invited.page.getByLabel('The same again').fill('three quiet heron');
    await invited.page.getByRole('button', { name: 'Set the password' }).click();
    await invited.page.getByText('The two are not the same').waitFor();
    await invited.page.getByLabel('The same again').fill('three quiet herons');
    await invited.page.getByRole('button', { name: 'Set the password' }).click();
    await invited.page.getByText('The new password holds').waitFor();
    await signInByForm(invited.page, 'runa.ashgrove@tautbook.example', 'three quiet herons');
    await invited.page.getByRole('button', { name: /Runa Ashgrove\s*clinician/ }).waitFor();
    expect(invited.complaints).toEqual([]);
    await invited.context.close();

    await page.getByRole('link', { name: 'People' }).click();
    await page.getByRole('row', { name: /Runa Ashgrove.*clinician.*active/ }).waitFor();
  });

  test('closes that person’s access, and opens it again', async () => {
    const { page } = administrator;
    const row = page.getByRole('row', { name: /Runa Ashgrove/ });
    await row.getByRole('button', { name: 'Close access' }).click();
    await looksRight(page, 'close-access');
    await page.getByRole('dialog').getByRole('button', { name: 'Close the access' }).click();
    await row.getByText('access closed').waitFor();
    expect((await house.book.services.people.list()).find(({ name }) => name === 'Runa Ashgrove')?.state).toBe('closed');
    await row.getByRole('button', { name: 'Open again' }).click();
    await page.getByRole('dialog').getByRole('button', { name: 'Open the access' }).click();
    await row.getByText('active').waitFor();
  });

  test('registers a device, sees its key once, and the key opens the device link until it is revoked', async () => {
    const { page } = administrator;
    await page.goto('/devices');
    await page.getByRole('button', { name: 'Register a device' }).click();
    const dialog = page.getByRole('dialog');
    await dialog.getByLabel('Name').fill('Heron on bench 2');
    await dialog.getByLabel('Rig').selectOption({ label: 'Heron, eight cables, two sliding jaws' });
    await dialog.getByRole('button', { name: 'Register', exact: true }).click();
    await page.getByRole('dialog', { name: 'The key of Heron on bench 2' }).waitFor();
    await looksRight(page, 'device-key');
    const key = (await dialog.locator('code').first().textContent()) ?? '';
    expect(key).toMatch(/^tbk_/);
    // What is shown once does not vanish by a slip of the hand.
    await page.keyboard.press('Escape');
    await page.mouse.click(5, 5);
    expect(await dialog.isVisible()).toBe(true);
    await dialog.getByRole('button', { name: 'I have put the key away' }).click();
    await dialog.waitFor({ state: 'detached' });
    await page.reload();
    await page.getByRole('row', { name: /Heron on bench 2/ }).waitFor();
    expect(await page.content()).not.toContain(key);

    const device = await BenchDevice.connect(house.url, key, { code: 'heron-8', revision: 2 });
    const row = page.getByRole('row', { name: /Heron on bench 2/ });
    await row.getByText('connected', { exact: true }).waitFor();
    await looksRight(page, 'devices-connected');
    await row.getByRole('button', { name: 'Revoke' }).click();
    await looksRight(page, 'device-revoke');
    await page.getByRole('dialog').getByRole('button', { name: 'Revoke its key' }).click();
    await row.getByText('revoked', { exact: true }).waitFor();
    expect(await device.hear('fault')).toMatchObject({ code: 'KEY_REVOKED', fatal: true });
    await expect(BenchDevice.connect(house.url, key)).rejects.toThrow(/403/);
  });

  test('reads in the audit trail what was done, by whom', async () => {
    const { page } = administrator;
    await page.goto('/audit');
    for (const words of ['Register a device.*Heron on bench 2', 'Revoke a device.*Heron on bench 2', 'Invite a person.*Runa Ashgrove', 'close or reopen their access.*Runa Ashgrove.*closed.*true']) await page.getByRole('row', { name: new RegExp(`Maren Tollgrave.*${words}`) }).first().waitFor();
    await looksRight(page, 'audit');
    await page.goto('/');
    await page.getByRole('table', { name: 'Latest entries of the audit trail' }).waitFor();
    await looksRight(page, 'administrator-today');
    expect(administrator.complaints).toEqual([]);
  });

  test('reads along in a study only after adding themselves, and the trail says so', async () => {
    const { page } = administrator;
    await page.goto('/studies');
    await page.getByRole('button', { name: /Add yourself as a reader of Mortise/ }).click();
    await looksRight(page, 'join-study');
    await page.getByRole('dialog').getByRole('button', { name: 'Add me as a reader' }).click();
    await page.getByRole('table', { name: 'Studies', exact: true }).getByRole('link', { name: /^Mortise/ }).click();
    await page.getByText('you are a reader of it').waitFor();
    await page.goto('/audit');
    await page.getByRole('row', { name: /Maren Tollgrave.*reader/i }).first().waitFor();
  });
});

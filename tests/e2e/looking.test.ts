/** The eyes of the walk over every page: each fault that is planted here is one they must see. */
import type { Browser, Page } from 'playwright-core';
import { afterAll, beforeAll, expect, test } from 'vitest';
import { seriousFindings } from '../support/axe';
import { launchBrowser } from '../support/browser';
import { overflowing, walkByKeyboard } from './support/looking';

let browser: Browser;
let page: Page;

beforeAll(async () => {
  browser = await launchBrowser();
  page = await browser.newPage({ viewport: { width: 390, height: 844 } });
});

afterAll(() => browser?.close());

const show = (body: string) => page.setContent(`<!doctype html><html lang="en"><title>A page</title><main><h1>A page</h1>${body}</main></html>`);

test('a sound page has no fault', async () => {
  await show('<a href="#x">One</a> <button>Two</button> <label>Three <input></label>');
  expect(await seriousFindings(page)).toEqual([]);
  expect(await overflowing(page)).toEqual([]);
  expect(await walkByKeyboard(page)).toEqual({ unreached: [], unseen: [], reached: 3 });
});

test('pale words and a button without a name are findings', async () => {
  await show('<p style="color: silver">Pale words</p><button></button>');
  const findings = await seriousFindings(page);
  expect(findings.some((finding) => finding.startsWith('color-contrast'))).toBe(true);
  expect(findings.some((finding) => finding.startsWith('button-name'))).toBe(true);
});

test('what sticks out sideways is named', async () => {
  await show('<p style="width: 500px">Too wide</p>');
  expect(await overflowing(page)).toEqual([expect.stringMatching(/^p "Too wide" ends at \d+ of 390 px$/)]);
});

test('a control that hides its focus, and one that the keyboard never comes to, are named', async () => {
  await show('<button style="outline: none">Hidden</button><button onfocus="this.blur()">Never</button><button>Seen</button>');
  const { unseen, unreached } = await walkByKeyboard(page);
  expect(unseen).toEqual(['button "Hidden"']);
  expect(unreached).toEqual(['button "Never"']);
});

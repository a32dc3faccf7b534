/** What every step of a browser test looks at besides its own claim: no barrier in the page as it stands, and a picture. */
import type { Page } from 'playwright-core';
import { expect } from 'vitest';
import { seriousFindings } from '../../support/axe';
import { screenFile } from './demo-lab';
import { overflowing, pictureWhole, settled } from './looking';

/** Refuses a page (with whatever dialog is open over it) that keeps a reader out; its picture goes to .screens/steps. */
export async function looksRight(page: Page, name: string): Promise<void> {
  await settled(page);
  expect(await seriousFindings(page)).toEqual([]);
  expect(await overflowing(page)).toEqual([]);
  await pictureWhole(page, screenFile(`steps/${name}`), page.viewportSize() ?? { width: 1440, height: 900 });
}

/** What can be seen of a page from outside: whether it has settled, whether it fits, what the keyboard reaches. */
import { mkdirSync } from 'node:fs';
import { dirname } from 'node:path';
import type { Locator, Page } from 'playwright-core';

/** The page shows what it has to show: its heading, no waiting lines, its faces, its scene where it has one. */
export async function settled(page: Page): Promise<void> {
  await page.locator('h1').first().waitFor();
  // Asked again and again until it holds: an answer that is a promise would count as yes at once.
  await page.waitForFunction(() => {
    const waiting = document.querySelector('.waiting-line, [role="progressbar"]');
    const scene = document.querySelector('[data-testid="scene"]');
    const words = document.querySelector('main')?.textContent ?? '';
    return document.fonts.status === 'loaded' && waiting === null && !words.includes('Setting up the scene') && (scene === null || scene.querySelector('canvas') !== null);
  });
  // What was asked for has been painted.
  await page.evaluate(() => new Promise((resolve) => requestAnimationFrame(() => requestAnimationFrame(resolve))));
}

/** Elements that stick out to the right of a page that should not scroll sideways; empty when it does not. */
export function overflowing(page: Page): Promise<string[]> {
  return page.evaluate(() => {
    const width = document.documentElement.clientWidth;
    if (document.documentElement.scrollWidth <= width) return [];
    const out = [...document.querySelectorAll('body *')].filter((element) => element.getBoundingClientRect().right > width + 0.5);
    return out.map((element) => `${element.tagName.toLowerCase()} "${(element.textContent ?? '').slice(0, 40)}" ends at ${Math.round(element.getBoundingClientRect().right)} of ${width} px`);
  });
}

/**
 * A picture of the whole page, in a window as high as the page: the browser's own picture of more than the window
 * stretches canvases.
 */
export async function pictureWhole(page: Page, path: string, size: { width: number; height: number }): Promise<void> {
  mkdirSync(dirname(path), { recursive: true });
  const height = await page.evaluate(() => document.documentElement.scrollHeight);
  if (height > size.height) {
    await page.setViewportSize({ width: size.width, height });
    await settled(page);
  }
  await page.screenshot({ path });
  if (height > size.height) await page.setViewportSize(size);
}

/** How many different colours the picture of an element has: a scene that draws nothing has a few. */
export async function coloursOf(element: Locator): Promise<number> {
  const picture = (await element.screenshot()).toString('base64');
  return element.page().evaluate(async (base64) => {
    const image = new Image();
    image.src = `data:image/png;base64,${base64}`;
    await image.decode();
    const canvas = new OffscreenCanvas(image.width, image.height);
    const context = canvas.getContext('2d');
    if (!context) return 0;
    context.drawImage(image, 0, 0);
    return new Set(new Uint32Array(context.getImageData(0, 0, image.width, image.height).data.buffer)).size;
  }, picture);
}

export interface KeyboardWalk {
  /** Controls that Tab never came to. */
  unreached: string[];
  /** Controls that had the focus and did not show it. */
  unseen: string[];
  reached: number;
}

/** Walks from the top of the page through every control with the Tab key. */
export async function walkByKeyboard(page: Page): Promise<KeyboardWalk> {
  const controls = await page.evaluate(() => {
    const all = [...document.querySelectorAll<HTMLElement>('a[href], button, input, select, textarea, [tabindex]')].filter((element) => {
      // A list of tabs hands the focus on to the one that is open.
      if (element.tabIndex < 0 || element.matches(':disabled, [type="hidden"], [role="tablist"]')) return false;
      // Of a group of radio buttons the keyboard stops at one.
      if (element instanceof HTMLInputElement && element.type === 'radio' && !element.checked) return false;
      return element.checkVisibility({ checkVisibilityCSS: true });
    });
    all.forEach((element, index) => element.setAttribute('data-walk', String(index)));
    (document.activeElement as HTMLElement | null)?.blur();
    getSelection()?.removeAllRanges();
    document.body.tabIndex = -1;
    document.body.focus();
    document.body.removeAttribute('tabindex');
    return all.map((element) => `${element.tagName.toLowerCase()} "${(element.getAttribute('aria-label') ?? element.textContent ?? '').trim().slice(0, 50)}"`);
  });
  const reached = new Set<number>();
  const unseen: string[] = [];
  for (let presses = 0; presses < controls.length + 12 && reached.size < controls.length; presses += 1) {
    await page.keyboard.press('Tab');
    const at = await page.evaluate(() => {
      const element = document.activeElement as HTMLElement | null;
      if (element === null || element === document.body) return null;
      const style = getComputedStyle(element);
      const { width, height, top, bottom } = element.getBoundingClientRect();
      const outlined = style.outlineStyle !== 'none' && parseFloat(style.outlineWidth) >= 1 && !/, 0\)$|transparent/.test(style.outlineColor);
      return { index: Number(element.getAttribute('data-walk') ?? -1), seen: outlined && width > 1 && height > 1 && bottom > 0 && top < innerHeight };
    });
    if (at === null || at.index < 0) continue;
    if (!reached.has(at.index) && !at.seen) unseen.push(controls[at.index] ?? '');
    reached.add(at.index);
  }
  await page.evaluate(() => (document.activeElement as HTMLElement | null)?.blur());
  return { unreached: controls.filter((_, index) => !reached.has(index)), unseen, reached: reached.size };
}

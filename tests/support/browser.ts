/**
 * A real browser for tests: the system's Chromium where there is one, otherwise the binary inside an npm package.
 * Nothing is downloaded. WebGL runs on SwiftShader, as on a machine without a graphics card.
 */
import { existsSync } from 'node:fs';
import { type Browser, type BrowserContext, type BrowserContextOptions, chromium, type Page } from 'playwright-core';

const systemChromium = '/usr/bin/chromium';
const quietArgs = [
  '--no-sandbox', '--disable-quic', '--disable-background-networking', '--disable-component-update', '--disable-sync', '--no-first-run',
  '--use-angle=swiftshader', '--enable-unsafe-swiftshader', '--disable-dev-shm-usage',
  // As a browser without a graphics card does by itself: pages are put together by the processor, WebGL alone is emulated.
  // With SwiftShader under every canvas a page of two redraws twice a second.
  '--disable-gpu-compositing',
];

export async function launchBrowser(): Promise<Browser> {
  if (existsSync(systemChromium)) return chromium.launch({ executablePath: systemChromium, args: quietArgs });
  // With this variable the package unpacks the system libraries that it brings, which a bare machine lacks.
  process.env['AWS_EXECUTION_ENV'] ??= 'AWS_Lambda_nodejs20.x';
  // Its own list of arguments is left out: one process for all and no web security are not what a reader's browser does.
  const { default: packed } = await import('@sparticuz/chromium');
  return chromium.launch({ executablePath: await packed.executablePath(), args: [...quietArgs, '--use-gl=angle', '--no-zygote', '--headless=shell', '--font-render-hinting=none'] });
}

export interface Visitor {
  context: BrowserContext;
  page: Page;
  /** What the page complained about: script errors and console errors. A test ends by looking at it. */
  complaints: string[];
}

/** One person with a browser window of their own. Responses that a test provokes on purpose are named in `expected`. */
export async function visitor(browser: Browser, options: BrowserContextOptions & { expected?: RegExp } = {}): Promise<Visitor> {
  const { expected, ...contextOptions } = options;
  const context = await browser.newContext({ viewport: { width: 1440, height: 900 }, locale: 'en-GB', timezoneId: 'UTC', ...contextOptions });
  const page = await context.newPage();
  const complaints: string[] = [];
  page.on('pageerror', (error) => complaints.push(error.message));
  page.on('console', (message) => {
    if (message.type() === 'error' && !expected?.test(message.text())) complaints.push(message.text());
  });
  return { context, page, complaints };
}

/**
 * A walk over every page by every role, wide and narrow, by day and by lamp-off light: nothing that keeps a reader out (axe:
 * serious or worse), nothing that scrolls sideways, nothing that the keyboard cannot reach or that hides its focus, no
 * complaint of the browser. Pictures go to .screens/, to be looked at.
 */
import { matchPath, type RouteObject } from 'react-router-dom';
import type { Browser } from 'playwright-core';
import { afterAll, beforeAll, describe, expect, test } from 'vitest';
import type { CastName } from '@server/db/seed/cast';
import { seriousFindings } from '../support/axe';
import { launchBrowser, type Visitor, visitor } from '../support/browser';
import { type DemoHouse, openDemoHouse, screenFile } from './support/demo-lab';
import { labAddresses, type LabAddresses } from './support/lab-addresses';
import { overflowing, pictureWhole, settled, walkByKeyboard } from './support/looking';

const widths = [{ name: 'wide', width: 1440, height: 900 }, { name: 'narrow', width: 390, height: 844 }] as const;
const lamps = ['light', 'dark'] as const;

let house: DemoHouse;
let browser: Browser;
let at: LabAddresses;

beforeAll(async () => {
  [house, browser] = await Promise.all([openDemoHouse(), launchBrowser()]);
  at = await labAddresses(house);
});

afterAll(async () => {
  await browser?.close();
  await house?.close();
});

/** Where a page is, under the name its pictures have. */
type Stops = Record<string, string>;

const room = (): Stops => ({
  today: '/',
  studies: '/studies',
  study: `/studies/${at.sedge}`,
  moments: `/studies/${at.sedge}/moments`,
  'session-open': `/sessions/${at.openSession}`,
  log: `/sessions/${at.closedSession}/log`,
  run: `/sessions/${at.openSession}/run`,
  trial: `/trials/${at.richTrial}`,
  rigs: '/rigs',
  rig: `/rigs/${at.heron}`,
  devices: '/devices',
  account: '/account',
});

/** What reads the same for everybody who may open it. */
const everybodys = (): Stops => ({
  moments: `/studies/${at.sedge}/moments`,
  'session-closed': `/sessions/${at.closedSession}`,
  'session-planned': `/sessions/${at.plannedSession}`,
  'run-planned': `/sessions/${at.plannedSession}/run`,
  'run-closed': `/sessions/${at.closedSession}/run`,
  'trial-span': `/trials/${at.richTrial}?at=11.6&from=11&to=14`,
  'trial-planned': `/trials/${at.plannedTrial}`,
  nowhere: '/no/such/page',
});

const stops: Record<'administrator' | 'lead' | 'operator' | 'clinician', () => Stops> = {
  administrator: () => ({ today: '/', studies: '/studies', rigs: '/rigs', rig: `/rigs/${at.wren}`, 'rig-import': '/rigs/import', devices: '/devices', people: '/people', audit: '/audit', outbox: '/outbox', account: '/account', 'study-new': '/studies/new', study: `/studies/${at.sedge}` }),
  lead: () => ({ ...room(), ...everybodys(), 'study-new': '/studies/new', mortise: `/studies/${at.mortise}`, plan: `/studies/${at.sedge}/sessions/new`, 'rig-import': '/rigs/import', 'trial-void': `/trials/${at.voidTrial}` }),
  operator: room,
  clinician: () => ({ today: '/', studies: '/studies', study: `/studies/${at.sedge}`, session: `/sessions/${at.closedSession}`, trial: `/trials/${at.richTrial}`, rigs: '/rigs', rig: `/rigs/${at.heron}`, devices: '/devices', people: '/people', outbox: '/outbox', account: '/account' }),
};

const outside = { 'sign-in': '/sign-in', forgot: '/forgot', reset: '/reset?token=made-up', 'reset-stale': '/reset', setup: '/setup' };

/** Asked for on purpose: refusals by role and membership are answers, which the browser prints in red. */
const refusals = /Failed to load resource: the server responded with a status of (401|403|404)/;

/** Everything that is wrong with the page in each of its looks. */
async function lookAt({ page, complaints }: Visitor, address: string, picture: string): Promise<string[]> {
  const wrong: string[] = [];
  await page.setViewportSize(widths[0]);
  await page.emulateMedia({ colorScheme: 'light', reducedMotion: 'reduce' });
  await page.goto(address);
  for (const { name, ...size } of widths) {
    await page.setViewportSize(size);
    for (const colorScheme of lamps) {
      const look = `${name} ${colorScheme}`;
      await page.emulateMedia({ colorScheme });
      await settled(page);
      // Another lamp changes colours alone.
      wrong.push(...(await seriousFindings(page, colorScheme === 'light' ? undefined : ['color-contrast'])).map((finding) => `${look}: ${finding}`), ...(await overflowing(page)).map((text) => `${look}: ${text}`));
      await pictureWhole(page, screenFile(`${picture}-${name}-${colorScheme}`), size);
    }
    const { unreached, unseen } = await walkByKeyboard(page);
    wrong.push(...unreached.map((control) => `${name}: Tab never comes to ${control}`), ...unseen.map((control) => `${name}: no visible focus on ${control}`));
  }
  wrong.push(...complaints.splice(0));
  return wrong;
}

describe.each(Object.keys(stops) as (CastName & keyof typeof stops)[])('every page for the %s', (role) => {
  test('can be read, fits, and is worked by keyboard', async () => {
    const reader = await house.enter(browser, role, { expected: refusals });
    const wrong: Record<string, string[]> = {};
    for (const [name, address] of Object.entries(stops[role]())) {
      const found = await lookAt(reader, address, `${role}/${name}`);
      if (found.length > 0) wrong[name] = found;
    }
    await reader.context.close();
    expect(wrong).toEqual({});
  }, 600_000);
});

test('every page before the sign-in can be read, fits, and is worked by keyboard', async () => {
  const stranger = await visitor(browser, { baseURL: house.url, expected: refusals });
  const wrong: Record<string, string[]> = {};
  for (const [name, address] of Object.entries(outside)) {
    const found = await lookAt(stranger, address, `outside/${name}`);
    if (found.length > 0) wrong[name] = found;
  }
  await stranger.context.close();
  expect(wrong).toEqual({});
}, 300_000);

test('the walk leaves no page of the client out', () => {
  const paths = (of: readonly RouteObject[]): string[] => of.flatMap((route) => [...(route.index ? ['/'] : route.path ? [`/${route.path.replace(/^\//, '')}`] : []), ...paths(route.children ?? [])]);
  const features = import.meta.glob<Record<string, unknown>>('../../client/src/features/*/index.ts', { eager: true });
  const routes = Object.values(features).flatMap((feature) => Object.entries(feature).filter(([name]) => name.endsWith('Routes')).flatMap(([, made]) => made as RouteObject[]));
  const all = paths(routes);
  const walked = [...Object.values(stops).flatMap((of) => Object.values(of())), ...Object.values(outside)].map((address) => address.split('?')[0] ?? '');
  expect(all.filter((path) => !walked.some((address) => matchPath(path, address)))).toEqual([]);
  expect(all.length).toBeGreaterThan(15);
});

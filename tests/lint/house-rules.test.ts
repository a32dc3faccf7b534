/**
 * The rules of the house hold themselves: each is shown to bite on the smallest piece of code that breaks it, and to
 * leave alone the piece beside it that keeps it.
 */
import { ESLint } from 'eslint';
import { readdirSync, readFileSync } from 'node:fs';
import { fileURLToPath } from 'node:url';
import { describe, expect, it } from 'vitest';

const root = fileURLToPath(new URL('../..', import.meta.url));
const eslint = new ESLint({ cwd: root });

async function rulesBroken(filePath: string, code: string): Promise<string[]> {
  const [result] = await eslint.lintText(code, { filePath: `${root}${filePath}` });
  return (result?.messages ?? []).map((message) => message.ruleId ?? `parse: ${message.message}`);
}

const boundary = 'boundaries/dependencies';
const restricted = '@typescript-eslint/no-restricted-imports';

describe('the linter refuses', () => {
  it.each([
    ['the entry from server', 'client/src/main.tsx', "import '../../server/live/bus';\n", boundary],
    ['client from server', 'client/src/lib/api.ts', "import '../../../server/live/bus';\n", boundary],
    ['client from server by its alias, for a type alone', 'client/src/lib/api.ts', "import type { Bus } from '@server/live/bus';\nexport type Same = Bus;\n", boundary],
    ['client from server, when it is needed', 'client/src/lib/api.ts', "export const bus = () => import('../../../server/live/bus');\n", boundary],
    ['client from server, handed on', 'client/src/lib/api.ts', "export { createBus } from '../../../server/live/bus';\n", boundary],
    ['client from Node', 'client/src/lib/api.ts', "export { readFileSync } from 'node:fs';\n", boundary],
    ['server from client', 'server/config.ts', "import '../client/src/lib/api';\n", boundary],
    ['shared from server', 'shared/rig/pose.ts', "import '../../server/live/bus';\n", boundary],
    ['shared from client', 'shared/rig/pose.ts', "import '@client/lib/api';\n", boundary],
    ["a server feature from another's inside", 'server/features/notes/service.ts', "import '../sessions/service';\n", boundary],
    ["the server from a feature's inside", 'server/live/bus.ts', "import '@server/features/sessions/service';\n", boundary],
    ["a client feature from another's inside", 'client/src/features/trial/TrialPage.tsx', "import '../today/queries';\n", boundary],
    ['the design system from a feature', 'client/src/ui/tokens.ts', "import '../features/today/queries';\n", boundary],
    ['a folder that is no part of the house', 'client/src/utils/thing.ts', 'export const thing = 1;\n', 'boundaries/no-unknown-files'],
    ['anything from such a folder', 'client/src/lib/api.ts', "import '../utils/thing';\n", 'boundaries/no-unknown-dependencies'],
    ['SQL in a service', 'server/features/notes/service.ts', "import { eq } from 'drizzle-orm';\nexport const same = eq;\n", restricted],
    ['SQL in a service, written out', 'server/features/notes/service.ts', "export const all = (db: { execute(text: string): unknown }) => db.execute('select 1');\n", 'no-restricted-syntax'],
    ['a driver in a service', 'server/features/notes/service.ts', "export { PGlite } from '@electric-sql/pglite';\n", restricted],
    ['tables in a route', 'server/features/notes/routes.ts', "import { notes } from '../../db/schema';\nexport const table = notes;\n", restricted],
    ['queries from a route', 'server/features/notes/routes.ts', "import { findNote } from './queries';\nexport const find = findNote;\n", restricted],
    ['rules in queries', 'server/features/notes/queries.ts', "import { refuse } from './errors';\nexport const no = refuse;\n", restricted],
    ['I/O in shared', 'shared/rig/pose.ts', "import { readFileSync } from 'node:fs';\nexport const read = readFileSync;\n", boundary],
    ['a package that is not pure in shared', 'shared/rig/pose.ts', "export { v4 } from 'uuid';\n", boundary],
    ['a clock in shared', 'shared/rig/pose.ts', 'export const now = () => Date.now();\n', 'no-restricted-properties'],
    ['a clock in shared, by a new date', 'shared/rig/pose.ts', 'export const now = () => new Date();\n', 'no-restricted-syntax'],
    ['a clock in shared, by the back door', 'shared/rig/pose.ts', 'export const now = () => globalThis.performance.now();\n', 'no-restricted-globals'],
    ['randomness in shared', 'shared/rig/pose.ts', 'export const chance = () => Math.random();\n', 'no-restricted-properties'],
    ['a raw colour in a feature', 'client/src/features/trial/TrialPage.tsx', "export const ink = '#1D2733';\n", 'no-restricted-syntax'],
    ['a raw colour in a class name', 'client/src/features/trial/TrialPage.tsx', "export const ink = 'text-[rgb(1,2,3)]';\n", 'no-restricted-syntax'],
    ['a raw colour as a number', 'client/src/replay/scene/rig-stage.ts', 'export const ink = 0x1d2733;\n', 'no-restricted-syntax'],
    ['a colour by name in a style', 'client/src/features/trial/TrialPage.tsx', "export const page = <p style={{ color: 'red' }} />;\n", 'no-restricted-syntax'],
    ['a colour by name in a drawing', 'client/src/features/trial/TrialPage.tsx', 'export const dot = <circle fill="red" />;\n', 'no-restricted-syntax'],
    ['a colour by name on a canvas', 'client/src/replay/stave/draw.ts', "export const draw = (pen: CanvasRenderingContext2D) => { pen.fillStyle = 'red'; };\n", 'no-restricted-syntax'],
    ['any', 'shared/rig/pose.ts', 'export const pose = (value: any) => value as unknown;\n', '@typescript-eslint/no-explicit-any'],
    ['any in the client', 'client/src/lib/api.ts', 'export const all: any[] = [];\n', '@typescript-eslint/no-explicit-any'],
    ['any in the server', 'server/config.ts', 'export const x = (value: unknown) => value as any;\n', '@typescript-eslint/no-explicit-any'],
  ])('%s', async (_what, filePath, code, rule) => {
    expect(await rulesBroken(filePath, code)).toContain(rule);
  });
});

describe('the linter leaves alone', () => {
  it.each([
    ['client from shared', 'client/src/lib/api.ts', "import '@shared/api/contract';\n"],
    ['server from shared', 'server/config.ts', "import '@shared/api/contract';\n"],
    ['server from Node', 'server/config.ts', "export { readFileSync } from 'node:fs';\n"],
    ["a feature from another's public file", 'server/features/notes/service.ts', "import '../sessions';\n"],
    ['schemas in shared', 'shared/rig/pose.ts', "export { z } from 'zod';\n"],
    ['a date that is given', 'shared/rig/pose.ts', 'export const later = (atMs: number) => new Date(atMs);\n'],
    ['SQL in queries', 'server/features/notes/queries.ts', "import { eq } from 'drizzle-orm';\nexport const same = eq;\n"],
    ['a transaction in a service', 'server/features/notes/service.ts', 'export const all = (db: { transaction(work: () => void): void }) => db.transaction(() => undefined);\n'],
    ['colours in the tokens', 'client/src/ui/tokens.ts', "export const ink = '#1D2733';\n"],
    ['a drawing that is not filled', 'client/src/features/trial/TrialPage.tsx', 'export const ring = <circle fill="none" stroke="currentColor" />;\n'],
    ['a fragment that is no colour', 'client/src/features/trial/TrialPage.tsx', "export const target = '#main';\n"],
  ])('%s', async (_what, filePath, code) => {
    expect(await rulesBroken(filePath, code)).toEqual([]);
  });
});

const sources = ['client/src', 'server', 'shared', 'tests', 'samples'].flatMap((folder) =>
  readdirSync(`${root}${folder}`, { recursive: true, encoding: 'utf8' }).filter((path) => /\.tsx?$/.test(path)).map((path) => `${folder}/${path}`));

it('is switched off nowhere', () => {
  const off = new RegExp(['eslint', 'disable'].join('-') + '|@ts-' + '(ignore|nocheck)');
  expect(sources.length).toBeGreaterThan(100);
  expect(sources.filter((path) => off.test(readFileSync(root + path, 'utf8')))).toEqual([]);
});

it('keeps raw colours out of style sheets other than the tokens', () => {
  const colour = /#[0-9a-fA-F]{3,8}\b|\b(rgba?|hsla?|oklch|oklab|color)\(/;
  const sheets = readdirSync(`${root}client/src`, { recursive: true, encoding: 'utf8' }).filter((path) => path.endsWith('.css') && !path.includes('ui/tokens'));
  const faults = sheets.flatMap((path) => readFileSync(`${root}client/src/${path}`, 'utf8').split('\n').filter((text) => colour.test(text)).map((text) => `${path}: ${text.trim()}`));
  expect(faults).toEqual([]);
});

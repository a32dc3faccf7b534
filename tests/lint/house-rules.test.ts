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
const sql = '@typescript-eslint/no-restricted-imports';

describe('the linter refuses', () => {
  it.each([
    ['the entry from server', 'client/src/main.tsx', "import '../../server/live/bus';\n", boundary],
    ['client from server', 'client/src/lib/api.ts', "import '../../../server/live/bus';\n", boundary],
    ['server from client', 'server/config.ts', "import '../client/src/lib/api';\n", boundary],
    ['shared from server', 'shared/rig/pose.ts', "import '../../server/live/bus';\n", boundary],
    ['shared from client', 'shared/rig/pose.ts', "import '@client/lib/api';\n", boundary],
    ["a server feature from another's inside", 'server/features/notes/service.ts', "import '../sessions/service';\n", boundary],
    ["a client feature from another's inside", 'client/src/features/trial/TrialPage.tsx', "import '../today/queries';\n", boundary],
    ['the design system from a feature', 'client/src/ui/tokens.ts', "import '../features/today/queries';\n", boundary],
    ['SQL in a service', 'server/features/notes/service.ts', "import { eq } from 'drizzle-orm';\nexport const same = eq;\n", sql],
    ['tables in a route', 'server/features/notes/routes.ts', "import { notes } from '../../db/schema';\nexport const table = notes;\n", sql],
    ['I/O in shared', 'shared/rig/pose.ts', "import { readFileSync } from 'node:fs';\nexport const read = readFileSync;\n", sql],
    ['a clock in shared', 'shared/rig/pose.ts', 'export const now = () => Date.now();\n', 'no-restricted-properties'],
    ['randomness in shared', 'shared/rig/pose.ts', 'export const chance = () => Math.random();\n', 'no-restricted-properties'],
    ['a raw colour in a feature', 'client/src/features/trial/TrialPage.tsx', "export const ink = '#1D2733';\n", 'no-restricted-syntax'],
    ['a raw colour in a class name', 'client/src/features/trial/TrialPage.tsx', "export const ink = 'text-[rgb(1,2,3)]';\n", 'no-restricted-syntax'],
    ['any', 'shared/rig/pose.ts', 'export const pose = (value: any) => value as unknown;\n', '@typescript-eslint/no-explicit-any'],
  ])('%s', async (_what, filePath, code, rule) => {
    expect(await rulesBroken(filePath, code)).toContain(rule);
  });
});

describe('the linter leaves alone', () => {
  it.each([
    ['client from shared', 'client/src/lib/api.ts', "import '@shared/api/contract';\n"],
    ['server from shared', 'server/config.ts', "import '@shared/api/contract';\n"],
    ['SQL in queries', 'server/features/notes/queries.ts', "import { eq } from 'drizzle-orm';\nexport const same = eq;\n"],
    ['colours in the tokens', 'client/src/ui/tokens.ts', "export const ink = '#1D2733';\n"],
    ['a fragment that is no colour', 'client/src/features/trial/TrialPage.tsx', "export const target = '#main';\n"],
  ])('%s', async (_what, filePath, code) => {
    expect(await rulesBroken(filePath, code)).toEqual([]);
  });
});

it('keeps raw colours out of style sheets other than the tokens', () => {
  const colour = /#[0-9a-fA-F]{3,8}\b|\b(rgba?|hsla?|oklch|oklab|color)\(/;
  const sheets = readdirSync(`${root}client/src`, { recursive: true, encoding: 'utf8' }).filter((path) => path.endsWith('.css') && !path.includes('ui/tokens'));
  const faults = sheets.flatMap((path) => readFileSync(`${root}client/src/${path}`, 'utf8').split('\n').filter((text) => colour.test(text)).map((text) => `${path}: ${text.trim()}`));
  expect(faults).toEqual([]);
});

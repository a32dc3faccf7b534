/**
 * Runs every check of the project, in order of what is cheapest to know, and prints `N passed, N failed` last.
 *
 *   npm test                 type check, lint, client build, all tests that need nothing but Node
 *   npm test -- --debian     the tests that need Debian's packages: the API on a real PostgreSQL
 *                            (TEST_DATABASE_URL) and the link client in Python
 *   npm test -- PATH...      only the named test files
 */
import { spawn } from 'node:child_process';
import { mkdtempSync, readFileSync, rmSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { parseArgs } from 'node:util';
import { z } from 'zod';

interface Tally {
  passed: number;
  failed: number;
}

const bin = (name: string) => join('node_modules', '.bin', name);

function run(command: string, args: readonly string[], env: NodeJS.ProcessEnv = {}): Promise<number> {
  return new Promise((resolve) => {
    const child = spawn(command, args, { stdio: 'inherit', env: { ...process.env, ...env } });
    child.once('error', () => resolve(127));
    child.once('exit', (code) => resolve(code ?? 1));
  });
}

/** One check that either holds or does not. */
async function check(title: string, command: string, args: readonly string[]): Promise<Tally> {
  console.log(`\n== ${title}`);
  const code = await run(command, args);
  return code === 0 ? { passed: 1, failed: 0 } : { passed: 0, failed: 1 };
}

const report = z.object({ numPassedTests: z.number(), numFailedTests: z.number(), numFailedTestSuites: z.number(), success: z.boolean() });

/** Test files; a run that ends badly without a failed test (a file that could not load) still counts as a failure. */
async function tests(title: string, args: readonly string[], env: NodeJS.ProcessEnv = {}): Promise<Tally> {
  console.log(`\n== ${title}`);
  const folder = mkdtempSync(join(tmpdir(), 'tautbook-tests-'));
  try {
    const file = join(folder, 'report.json');
    const code = await run(bin('vitest'), ['run', '--reporter=default', '--reporter=json', `--outputFile=${file}`, ...args], env);
    const seen = report.safeParse(JSON.parse(readFileSync(file, 'utf8')));
    if (!seen.success) return { passed: 0, failed: 1 };
    const { numPassedTests: passed, numFailedTests: failed } = seen.data;
    return { passed, failed: failed === 0 && code !== 0 ? 1 : failed };
  } catch {
    return { passed: 0, failed: 1 };
  } finally {
    rmSync(folder, { recursive: true, force: true });
  }
}

async function debianTests(): Promise<Tally[]> {
  if (!process.env['TEST_DATABASE_URL']) {
    console.error('TEST_DATABASE_URL is not set: point it at an empty PostgreSQL database that the tests may fill.');
    return [{ passed: 0, failed: 1 }];
  }
  return [
    await tests('API on PostgreSQL', ['tests/api']),
    await tests('Link client in Python', ['tests/python'], { TAUTBOOK_PYTHON_REQUIRED: '1' }),
  ];
}

async function everything(): Promise<Tally[]> {
  const tallies = [
    await check('Type check', bin('tsc'), ['--noEmit']),
    await check('Lint', bin('eslint'), ['.']),
    await check('Client build', bin('vite'), ['build', '--logLevel', 'warn']),
  ];
  tallies.push(await tests('Tests', []));
  return tallies;
}

const { values, positionals } = parseArgs({ allowPositionals: true, options: { debian: { type: 'boolean', default: false } } });
const tallies = positionals.length > 0 ? [await tests('Named tests', positionals)] : values.debian ? await debianTests() : await everything();
const passed = tallies.reduce((sum, tally) => sum + tally.passed, 0);
const failed = tallies.reduce((sum, tally) => sum + tally.failed, 0);
console.log(`\n${passed} passed, ${failed} failed`);
process.exitCode = failed === 0 ? 0 : 1;

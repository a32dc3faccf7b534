/**
 * Runs the benchmarks of this folder, one after another, each in a process of its own so that none warms another up.
 *
 *   npm run -s bench                    all of them
 *   npm run -s bench -- NAME...         only these
 *   npm run -s bench -- --list          their names
 *   npm run -s bench -- --json          rows as JSON
 *
 * Exit status 1 when a target was missed, 2 when a name is unknown or a benchmark failed.
 */
import { spawn } from 'node:child_process';
import { readdirSync } from 'node:fs';
import { cpus } from 'node:os';
import { parseArgs } from 'node:util';
import { fileURLToPath, pathToFileURL } from 'node:url';
import type { Bench, Row } from './row';

const here = fileURLToPath(new URL('.', import.meta.url));
const names = readdirSync(here).filter((file) => file.endsWith('.bench.ts')).map((file) => file.slice(0, -'.bench.ts'.length)).sort();

/** In the child: one benchmark, its rows as the last line of the output. */
async function runHere(name: string): Promise<void> {
  const bench = (await import(pathToFileURL(`${here}${name}.bench.ts`).href)) as Bench;
  const rows = await bench.run();
  process.stdout.write(`\n${JSON.stringify(rows)}\n`, () => process.exit(0));
}

function runApart(name: string): Promise<Row[]> {
  return new Promise((resolve, reject) => {
    const child = spawn(process.execPath, ['--expose-gc', '--import', 'tsx', fileURLToPath(import.meta.url), '--here', name], { stdio: ['ignore', 'pipe', 'inherit'] });
    let text = '';
    child.stdout.setEncoding('utf8').on('data', (piece: string) => { text += piece; });
    child.once('error', reject);
    child.once('exit', (code) => {
      try {
        if (code !== 0) throw new Error(`${name} ended with status ${code}`);
        resolve(JSON.parse(text.trim().split('\n').at(-1) ?? '') as Row[]);
      } catch (error) {
        reject(error instanceof Error ? error : new Error(String(error)));
      }
    });
  });
}

const short = (value: number): string => (Math.abs(value) >= 1000 ? Math.round(value).toLocaleString('en-GB').replaceAll(',', ' ') : String(Number(value.toPrecision(3))));

function print(name: string, rows: readonly Row[]): void {
  console.log(`\n${name}`);
  const cells = rows.map((row) => [
    row.name, `${short(row.value)} ${row.unit}`, row.baseline ?? '', row.ratio === null ? '' : `x ${short(row.ratio)}`, row.target, row.met === null ? '' : row.met ? 'met' : 'MISSED',
  ]);
  const widths = (cells[0] ?? []).map((_, column) => Math.max(...cells.map((line) => (line[column] ?? '').length)));
  for (const line of cells) console.log(`  ${line.map((cell, column) => cell.padEnd(widths[column] ?? 0)).join('  ').trimEnd()}`);
}

async function main(): Promise<number> {
  const { values, positionals } = parseArgs({ allowPositionals: true, options: { list: { type: 'boolean', default: false }, json: { type: 'boolean', default: false }, here: { type: 'string' } } });
  if (values.here !== undefined) {
    await runHere(values.here);
    return 0;
  }
  if (values.list) {
    console.log(values.json ? JSON.stringify(names) : names.join('\n'));
    return 0;
  }
  const unknown = positionals.filter((name) => !names.includes(name));
  if (unknown.length > 0) {
    console.error(`No such benchmark: ${unknown.join(', ')}. There are: ${names.join(', ')}.`);
    return 2;
  }
  if (!values.json) console.log(`Node.js ${process.version} on ${cpus().length} x ${cpus()[0]?.model ?? 'unknown processor'}`);
  const all: Record<string, Row[]> = {};
  let failed = false;
  for (const name of positionals.length > 0 ? positionals : names) {
    try {
      const rows = await runApart(name);
      all[name] = rows;
      if (!values.json) print(name, rows);
    } catch (error) {
      failed = true;
      console.error(error instanceof Error ? error.message : String(error));
    }
  }
  if (values.json) console.log(JSON.stringify(all, null, 1));
  if (failed) return 2;
  return Object.values(all).flat().some((row) => row.met === false) ? 1 : 0;
}

process.exitCode = await main();

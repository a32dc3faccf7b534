/**
 * `npm run -s analyse -- --rig RIG.json [--rules RULES.json] RECORDING.csv[.gz]`: flags and measures of a recording as
 * one JSON object on standard output. No server, no database.
 *
 * Exit status 0 when the recording was analysed; 2 when rig, rules, recording or arguments are at fault.
 */
import { readArguments, usage, type AnalyseArguments } from './analyse/arguments';
import { analyseFile } from './analyse/analyse-file';
import { InputFault } from './analyse/input-fault';
import { progressLine } from './analyse/progress';
import { readRig, readRules } from './analyse/read-inputs';

const given = readArguments(process.argv.slice(2));
if (given === null) process.stdout.write(usage);
else if (typeof given === 'string') refuse([given, 'See analyse --help.']);
else await analyse(given);

async function analyse({ rig: rigPath, rules: rulesPath, recording }: AnalyseArguments): Promise<void> {
  const progress = progressLine(process.stderr);
  try {
    const rig = await readRig(rigPath);
    const rules = await readRules(rulesPath, rig);
    const analysis = await analyseFile(recording, rig, rules, progress.show);
    progress.clear();
    process.stdout.write(`${JSON.stringify(analysis)}\n`);
  } catch (error) {
    progress.clear();
    if (!(error instanceof InputFault)) throw error;
    refuse(error.lines);
  }
}

function refuse(lines: readonly string[]): void {
  process.stderr.write(`${lines.join('\n')}\n`);
  process.exitCode = 2;
}

/** Arguments of `analyse`: --rig RIG.json [--rules RULES.json] RECORDING.csv[.gz] */
import { parseArgs } from 'node:util';

export type AnalyseArguments = { readonly rig: string; readonly rules: string | null; readonly recording: string };

export const usage = `analyse finds flags and measures in a recording and prints them as JSON.

  npm run -s analyse -- --rig RIG.json [--rules RULES.json] RECORDING.csv[.gz]

  --rig RIG.json      the rig file the recording was made with (tautbook.rig/1)
  --rules RULES.json  rules that replace the defaults (tautbook.rules/1); kinds left out keep their defaults, null turns one off
  --help              this text

Faults in the input go to standard error, with exit status 2.
`;

/** @returns the arguments, null for --help, or a sentence about what is wrong with them */
export function readArguments(argv: readonly string[]): AnalyseArguments | null | string {
  try {
    const { values, positionals } = parseArgs({
      args: [...argv],
      allowPositionals: true,
      options: { rig: { type: 'string' }, rules: { type: 'string' }, help: { type: 'boolean' } },
    });
    if (values.help) return null;
    const recording = positionals[0];
    if (values.rig === undefined) return 'analyse needs --rig RIG.json: a recording means nothing without its rig.';
    if (recording === undefined) return 'analyse needs a recording: a CSV file, plain or .gz.';
    if (positionals.length > 1) return `analyse takes one recording; ${positionals.length} were given.`;
    return { rig: values.rig, rules: values.rules ?? null, recording };
  } catch (error) {
    return error instanceof Error ? error.message : 'The arguments cannot be read.';
  }
}

import { execFile } from 'node:child_process';
import { fileURLToPath } from 'node:url';

const project = fileURLToPath(new URL('../..', import.meta.url));

export interface CalcRun {
  readonly status: number;
  readonly stdout: string;
  readonly stderr: string;
}

/** Runs the `calc` command as someone outside would, with the text given on standard input. */
export function runCalc(input: string): Promise<CalcRun> {
  return new Promise((resolve, reject) => {
    const child = execFile(
      'npm',
      ['run', '-s', 'calc'],
      { cwd: project, maxBuffer: 1 << 28 },
      (error, stdout, stderr) => {
        if (error !== null && typeof error.code !== 'number') reject(error);
        else resolve({ status: error === null ? 0 : (error.code as number), stdout, stderr });
      },
    );
    child.stdin?.end(input);
  });
}

export type CalcAnswer<Value = Record<string, unknown>> =
  | { readonly ok: true; readonly value: Value }
  | { readonly ok: false; readonly error: { readonly code: string; readonly message: string } };

/** Answers of a list of requests in one run. */
export async function calc(requests: readonly object[]): Promise<CalcAnswer[]> {
  const { stdout, stderr } = await runCalc(JSON.stringify(requests));
  if (stderr !== '') throw new Error(`calc complained: ${stderr}`);
  return JSON.parse(stdout) as CalcAnswer[];
}

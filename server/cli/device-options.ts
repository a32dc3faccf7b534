/** The command line of the simulated device: what may be asked for, and what is wrong with what was. */
import { readFileSync } from 'node:fs';
import { parseArgs } from 'node:util';
import { NumericError, parseRig, type RigModel } from '@shared/rig';
import { parseTrouble, taskCodes, tasks, troubleKinds, type TroubleWish, type Upsets } from '../simulator';

export type DeviceCommand = {
  url: string;
  keys: string[];
  rig: RigModel;
  revision: number;
  /** null: each run takes the next task. */
  task: string | null;
  /** null: a trouble or two by chance in each run. */
  troubles: TroubleWish[] | null;
  seed: number;
  rateHz: number;
  batchSamples: number;
  durationS: number;
  /** Runs after which it ends; null: it goes on until it is stopped. */
  trials: number | null;
  unfiled: boolean;
  driftPpm: number;
  speed: number;
  upsets: Upsets;
  wrench: boolean;
  stretch: boolean;
  json: boolean;
  quiet: boolean;
};

/** Something on the command line that cannot be: one sentence. */
export class UsageError extends Error {
  override readonly name = 'UsageError';
}

const text = { type: 'string' } as const;
const yes = { type: 'boolean' } as const;
const options = {
  url: text, key: { type: 'string', multiple: true }, keys: text, devices: text, rig: text, revision: text, task: text,
  trouble: { type: 'string', multiple: true }, seed: text, rate: text, batch: text, duration: text, trials: text, unfiled: yes,
  drift: text, speed: text, lose: text, repeat: text, break: text, wrench: yes, stretch: yes, json: yes, quiet: yes, help: { type: 'boolean', short: 'h' },
} as const;

const list = (entries: readonly (readonly [string, string])[]): string => entries.map(([name, what]) => `    ${name.padEnd(16)}${what}`).join('\n');

export const help = `npm run device -- [options]

A simulated device on a running Tautbook server: it waits until a trial is armed on it, begins after a short human delay
and streams over the same link as a real device. Not a medical device and not a safety system: it moves nothing.

Where to
  --url URL         the server (default http://127.0.0.1:4680)
  --key KEY         a device's key, as shown when it was registered; give it again for each further device.
                    Without it, TAUTBOOK_DEVICE_KEY is read
  --keys FILE       keys, one a line
  --devices N       how many devices (default: one for each key)
  --rig FILE        its rig file (default samples/rigs/heron-8.json)
  --revision N      the rig's revision in the lab's book (default 1)

What it does
  --task NAME       the task of every run (default: each run takes the next one)
${list(tasks.map(({ code, describe }) => [code, describe]))}
  --trouble WHAT    what goes wrong; may be given several times. none: nothing. Default: one or two by chance.
                    Write slack, slack@12.5 (at 12.5 s), slip@20:cable=3 or gap@5:duration=0.2
${list(Object.entries(troubleKinds))}
  --seed N          the same seed makes the same runs (default 1)
  --rate HZ         samples a second (default 1000)
  --batch N         samples in a batch (default: those of 20 ms)
  --duration S      longest run, s; an operator may stop it before (default 45)
  --trials N        ends after so many runs of each device (default: goes on until Ctrl-C)
  --unfiled         does not wait to be armed: begins runs that are filed later
  --wrench          adds the wrench on the device as further channels
  --stretch         lengths as the drums see them, without the cables' stretch

How badly
  --drift PPM       how much faster the device's clock runs, millionths (default 0)
  --lose PART       part of the batches that are left out at first (0 to 0.5)
  --repeat PART     part of the batches that are sent twice (0 to 0.5)
  --break S         breaks the link about every so many seconds
  --speed X         times real time (default 1)

What it says
  --json            a report of every run on standard output at the end; events go to standard error
  --quiet           says nothing but faults
  --help            this

It ends with status 0 when everything that it made is in the book, 1 when something is not, 2 for a wrong command line.`;

/** @returns the command, or null when help was asked for. @throws UsageError */
export function readDeviceCommand(args: readonly string[], env: NodeJS.ProcessEnv): DeviceCommand | null {
  const given = parse(args);
  if (given.help) return null;
  const rateHz = number(given.rate, 'rate', 1000, 1, 20_000);
  const keys = keysOf(given, env);
  if (given.task !== undefined && !taskCodes.includes(given.task)) throw new UsageError(`There is no task “${given.task}”; there are ${taskCodes.join(', ')}.`);
  return {
    url: given.url ?? `http://127.0.0.1:${env['PORT'] ?? '4680'}`,
    keys,
    rig: rigOf(given.rig ?? 'samples/rigs/heron-8.json'),
    revision: whole(given.revision, 'revision', 1, 1, 1_000_000),
    task: given.task ?? null,
    troubles: troublesOf(given.trouble),
    seed: whole(given.seed, 'seed', 1, 0, Number.MAX_SAFE_INTEGER),
    rateHz,
    batchSamples: whole(given.batch, 'batch', Math.max(1, Math.round(rateHz / 50)), 1, 1000),
    durationS: number(given.duration, 'duration', 45, 0.01, 86_400),
    trials: given.trials === undefined ? null : whole(given.trials, 'trials', 1, 1, 1_000_000),
    unfiled: given.unfiled ?? false,
    driftPpm: number(given.drift, 'drift', 0, -10_000, 10_000),
    speed: number(given.speed, 'speed', 1, 0.01, 1000),
    upsets: {
      lose: number(given.lose, 'lose', 0, 0, 0.5),
      repeat: number(given.repeat, 'repeat', 0, 0, 0.5),
      ...(given.break === undefined ? {} : { breakEveryS: number(given.break, 'break', 1, 0.05, 86_400) }),
    },
    wrench: given.wrench ?? false,
    stretch: given.stretch ?? false,
    json: given.json ?? false,
    quiet: given.quiet ?? false,
  };
}

function parse(args: readonly string[]) {
  try {
    return parseArgs({ args: [...args], options, strict: true, allowPositionals: false }).values;
  } catch (error) {
    throw new UsageError(`${error instanceof Error ? error.message : String(error)} See --help.`);
  }
}

type Given = ReturnType<typeof parse>;

function keysOf(given: Given, env: NodeJS.ProcessEnv): string[] {
  const keys = [...(given.key ?? []), ...(given.keys === undefined ? [] : readText(given.keys, 'keys').split('\n').map((line) => line.trim()).filter((line) => line !== ''))];
  const fromEnv = env['TAUTBOOK_DEVICE_KEY'];
  if (keys.length === 0 && fromEnv) keys.push(fromEnv);
  if (keys.length === 0) throw new UsageError('A device needs its key: register it on the Devices page and give the key that is shown there with --key.');
  const devices = whole(given.devices, 'devices', keys.length, 1, 1000);
  if (devices > keys.length) throw new UsageError(`${devices} devices need ${devices} keys, one each; ${keys.length} ${keys.length === 1 ? 'is' : 'are'} given.`);
  return keys.slice(0, devices);
}

function troublesOf(given: readonly string[] | undefined): TroubleWish[] | null {
  if (given === undefined) return null;
  return given.filter((each) => each !== 'none').map((each) => {
    const wish = parseTrouble(each);
    if (typeof wish === 'string') throw new UsageError(wish);
    return wish;
  });
}

function rigOf(path: string): RigModel {
  let content: unknown;
  try {
    content = JSON.parse(readText(path, 'rig'));
  } catch (error) {
    if (error instanceof UsageError) throw error;
    throw new UsageError(`${path} is not JSON; give a rig file, like samples/rigs/heron-8.json.`);
  }
  try {
    return parseRig(content);
  } catch (error) {
    if (error instanceof NumericError) throw new UsageError(`${path} is no sound rig file. ${error.message}`);
    throw error;
  }
}

function readText(path: string, option: string): string {
  try {
    return readFileSync(path, 'utf8');
  } catch (error) {
    throw new UsageError(`The file of --${option} cannot be read: ${error instanceof Error ? error.message : String(error)}.`);
  }
}

function number(given: string | undefined, name: string, otherwise: number, least: number, most: number): number {
  if (given === undefined) return otherwise;
  const value = given.trim() === '' ? Number.NaN : Number(given);
  if (!(value >= least && value <= most)) throw new UsageError(`--${name} takes a number from ${least} to ${most}, not “${given}”.`);
  return value;
}

function whole(given: string | undefined, name: string, otherwise: number, least: number, most: number): number {
  const value = number(given, name, otherwise, least, most);
  if (!Number.isInteger(value)) throw new UsageError(`--${name} takes a whole number, not “${given}”.`);
  return value;
}

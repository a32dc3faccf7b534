/** `npm run device`: simulated devices on a running server. */
import { realpathSync } from 'node:fs';
import { fileURLToPath } from 'node:url';
import { createSimulatedDevice, LinkRefusal, simulateRun, taskCodes, troubleKinds, wrenchChannels, type DeviceEvent, type DeviceReport, type SimulatedDevice, type TroubleKind, type TroubleWish } from '../simulator';
import { channelNames } from '@shared/recording';
import { onStopSignal } from './stop-signals';
import { help, readDeviceCommand, UsageError, type DeviceCommand } from './device-options';

/** Written to by the command; a test gives its own. */
export interface DeviceConsole {
  say(line: string): void;
  report(json: string): void;
  fault(line: string): void;
}

/** Seeds of devices and of a device's runs lie this far apart, so that none repeats another. */
const NEXT_DEVICE = 1_000_003;

/**
 * Runs the devices until they are done or `stop` is aborted.
 *
 * @returns the exit status: 0 everything made is in the book, 1 something is not, 2 a wrong command line
 */
export async function runDevices(args: readonly string[], env: NodeJS.ProcessEnv, out: DeviceConsole, stop: AbortSignal): Promise<number> {
  let command: DeviceCommand | null;
  try {
    command = readDeviceCommand(args, env);
    if (command) simulateRun(runOptions(command, command.seed, 0));
  } catch (error) {
    if (!(error instanceof UsageError || error instanceof RangeError)) throw error;
    out.fault(error.message);
    return 2;
  }
  if (command === null) {
    out.report(help);
    return 0;
  }
  const asked = command;
  const devices = asked.keys.map((key, i) => deviceOf(asked, key, i, out));
  const ends = await Promise.allSettled(devices.map(({ device, finished }, i) => lead(device, finished, asked, `Device ${i + 1}`, out, stop)));
  const reports = devices.map(({ device }) => device.report());
  if (asked.json) out.report(JSON.stringify({ devices: reports }, null, 2));
  return ends.every((end) => end.status === 'fulfilled' && end.value) && reports.every(everythingIsIn) ? 0 : 1;
}

/** Connects one device and follows it to its end. @returns whether it got there in good order */
async function lead(device: SimulatedDevice, finished: Promise<boolean>, command: DeviceCommand, name: string, out: DeviceConsole, stop: AbortSignal): Promise<boolean> {
  const stopped = new Promise<boolean>((resolve) => {
    if (stop.aborted) resolve(true);
    stop.addEventListener('abort', () => resolve(true), { once: true });
  });
  try {
    const connected = await Promise.race([device.connect().then(() => true), stopped.then(() => false)]);
    if (!connected) return true;
  } catch (error) {
    if (!(error instanceof LinkRefusal)) throw error;
    out.fault(`${name}: ${error.message} ${error.wayOut}`);
    return false;
  } finally {
    if (stop.aborted) await device.close();
  }
  if (command.unfiled) device.startUnfiled();
  const good = await Promise.race([finished, stopped]);
  await device.close(5000);
  return good;
}

function deviceOf(command: DeviceCommand, key: string, index: number, out: DeviceConsole): { device: SimulatedDevice; finished: Promise<boolean> } {
  let closed = 0;
  let finish: (good: boolean) => void = () => undefined;
  const finished = new Promise<boolean>((resolve) => (finish = resolve));
  const device = createSimulatedDevice({
    url: command.url,
    key,
    rig: { code: command.rig.file.code, revision: command.revision },
    channels: channelNames(command.rig.cableCount, command.wrench ? wrenchChannels : []),
    rateHz: command.rateHz,
    firmware: 'tautbook simulated device',
    seed: command.seed + index * NEXT_DEVICE,
    driftPpm: command.driftPpm,
    speed: command.speed,
    upsets: command.upsets,
    source: (n) => simulateRun(runOptions(command, command.seed + index * NEXT_DEVICE + n, n)),
    onEvent(event) {
      const line = tellOf(event);
      if (event.type === 'fault' || event.type === 'gone') out.fault(`Device ${index + 1}: ${line}`);
      else if (!command.quiet) out.say(`Device ${index + 1}: ${line}`);
      if (event.type === 'gone') finish(false);
      if (event.type === 'closed') closed += 1;
      if (event.type === 'closed' && closed === command.trials) finish(true);
      else if (event.type === 'closed' && command.unfiled) setImmediate(() => device.state !== 'closed' && device.startUnfiled());
    },
  });
  return { device, finished };
}

function runOptions(command: DeviceCommand, seed: number, n: number): Parameters<typeof simulateRun>[0] {
  const { rig, rateHz, durationS, wrench, stretch } = command;
  return {
    rig, rateHz, durationS, seed, wrench, stretch,
    task: command.task ?? (taskCodes[n % taskCodes.length] as string),
    troubles: command.troubles ?? byChance(seed),
    chunkSamples: command.batchSamples,
  };
}

/** One or two troubles that do not last, chosen by the seed. */
function byChance(seed: number): TroubleWish[] {
  const passing = (Object.keys(troubleKinds) as TroubleKind[]).filter((kind) => kind !== 'slip' && kind !== 'cable-off');
  const at = (step: number) => ({ kind: passing[(seed * 7 + step) % passing.length] as TroubleKind });
  return seed % 3 === 0 ? [at(0)] : [at(0), at(3)];
}

function tellOf(event: DeviceEvent): string {
  switch (event.type) {
    case 'connected': return 'connected and waiting to be armed.';
    case 'away': return `the link is down; trying again.${event.refusal ? ` ${event.refusal.message}` : ''}`;
    case 'armed': return 'armed; beginning in a moment.';
    case 'disarmed': return 'disarmed.';
    case 'began': return event.trial === null ? `run ${event.run} begins without a trial.` : `run ${event.run} begins.`;
    case 'ended': return `run ${event.run} ended (${event.reason}).`;
    case 'closed': return `run ${event.run} is in the book.`;
    case 'refused': return `the server did not take run ${event.run}.`;
    case 'fault': return `the server said ${event.code}: ${event.message}`;
    case 'gone': return `${event.refusal.message} ${event.refusal.wayOut}`;
  }
}

const everythingIsIn = (report: DeviceReport): boolean => report.runs.every(({ state, samples, acknowledgedSamples }) => state === 'closed' && acknowledgedSamples === samples);

if (process.argv[1] !== undefined && realpathSync(process.argv[1]) === fileURLToPath(import.meta.url)) {
  const stopping = new AbortController();
  const stop = () => stopping.abort();
  onStopSignal(stop);
  process.once('disconnect', stop); // the program that started it is gone
  process.channel?.unref();
  const json = process.argv.includes('--json');
  process.exitCode = await runDevices(process.argv.slice(2), process.env, {
    say: (line) => (json ? process.stderr : process.stdout).write(`${line}\n`),
    report: (text) => process.stdout.write(`${text}\n`),
    fault: (line) => process.stderr.write(`${line}\n`),
  }, stopping.signal);
}

/**
 * A device that does not exist, on the link that real ones use: it answers the clock, waits to be armed, begins after a
 * human's delay, streams in real time, keeps what is not acknowledged, and goes on from there after a break.
 *
 * States: idle -> connecting -> greeting -> connected, and from each of them away (waits and connects again) or closed.
 */
import { createDeviceOutbox, type End, type ServerMessage } from '@shared/link';
import type { Chunk, ChannelName } from '@shared/recording';
import { seededRandom } from '../random';
import { createDeviceClock } from './device-clock';
import { startLiveRun, type LiveRun, type RunSource } from './live-run';
import { LinkRefusal, refusedFor } from './link-refusal';
import { openLink, type Link } from './open-link';
import { RunLedger, type RunReport } from './run-ledger';
import { planUpsets, type Upsets } from './upsets';

export type SimulatedDeviceOptions = {
  /** Address of the server: http, https, ws or wss. */
  url: string;
  key: string;
  rig: { code: string; revision: number };
  channels: readonly ChannelName[];
  rateHz?: number;
  /** The samples of the device's n-th run (from 0), for an armed trial or for none. Its chunks travel as batches. */
  source(n: number, trial: string | null): RunSource;
  seed?: number;
  firmware?: string;
  /** From arm to begin, ms: a person puts a hand in and nods. */
  humanDelayMs?: readonly [number, number];
  /** How fast the device's clock runs beside the machine's, millionths. */
  driftPpm?: number;
  /** Times real time. */
  speed?: number;
  upsets?: Upsets;
  /** First and longest wait before connecting again, ms. */
  reconnectMs?: readonly [number, number];
  /** A server from which nothing came for this long counts as gone. */
  silenceMs?: number;
  /** Keeps every sample that was made, for comparing with what was stored. */
  keepSamples?: boolean;
  onEvent?(event: DeviceEvent): void;
};

export type DeviceEvent =
  | { type: 'connected'; device: string }
  | { type: 'away'; refusal: LinkRefusal | null }
  | { type: 'armed' | 'disarmed'; trial: string }
  | { type: 'began'; run: string; trial: string | null }
  | { type: 'ended'; run: string; reason: End['reason'] }
  | { type: 'closed'; run: string }
  | { type: 'refused'; run: string }
  | { type: 'fault'; code: string; message: string }
  | { type: 'gone'; refusal: LinkRefusal };

export type DeviceReport = {
  device: string | null;
  state: SimulatedDevice['state'];
  runs: RunReport[];
  /** Times that a link was opened. */
  connections: number;
  faults: Record<string, number>;
};

export interface SimulatedDevice {
  readonly state: 'idle' | 'connecting' | 'greeting' | 'connected' | 'away' | 'closed';
  /** Connects; resolves when the server has welcomed the device. @throws LinkRefusal when the first attempt fails */
  connect(): Promise<void>;
  /** Begins a run that no trial waits for. @returns its id */
  startUnfiled(): string;
  mark(label: string): void;
  /** Ends the running run. */
  stop(reason?: End['reason']): void;
  /** Cuts the link without a word; the device connects again by itself. */
  breakLink(): void;
  /** Every sample that a run made, when `keepSamples` is set. */
  samplesOf(run: string): readonly Chunk[];
  report(): DeviceReport;
  /** Resolves once nothing runs and the server has closed every run, or the device is gone for good. */
  settled(): Promise<void>;
  /** Ends a run that is going on, waits at most `graceMs` for its acknowledgement, and says good-bye. */
  close(graceMs?: number): Promise<void>;
}

export function createSimulatedDevice(options: SimulatedDeviceOptions): SimulatedDevice {
  const { url, key, speed = 1, silenceMs = 15_000, humanDelayMs = [600, 1400], reconnectMs = [200, 3000] } = options;
  const random = seededRandom(options.seed ?? 1);
  const human = random.branch('human');
  const patience = random.branch('patience');
  const upsets = planUpsets(options.upsets ?? {}, random.branch('upsets'));
  const clock = createDeviceClock(Math.round(random.between(1, 4000) * 1e6), options.driftPpm ?? 0);
  const outbox = createDeviceOutbox();
  const ledger = new RunLedger(options.keepSamples ?? false);
  const faults: Record<string, number> = {};
  // A device that starts again numbers its runs afresh: the start of its life is part of their names.
  const life = Date.now().toString(36) + Math.floor(random.uniform() * 36 ** 4).toString(36);
  const waiters = new Set<() => void>();

  let state: SimulatedDevice['state'] = 'idle';
  let device: string | null = null;
  let link: Link | null = null;
  let live: LiveRun | null = null;
  let armed: string | null = null;
  let connections = 0;
  let runs = 0;
  let waitMs: number = reconnectMs[0];
  let nod: NodeJS.Timeout | undefined;
  let again: NodeJS.Timeout | undefined;
  let breaker: NodeJS.Timeout | undefined;
  let welcomed: { resolve(): void; reject(refusal: LinkRefusal): void } | null = null;
  let fatal: LinkRefusal | null = null;

  const tell = (event: DeviceEvent): void => options.onEvent?.(event);
  const wake = (): void => {
    for (const waiter of [...waiters]) waiter();
  };

  function pump(): void {
    while (state === 'connected' && link?.hungry()) {
      const message = outbox.next();
      if (message === null) return;
      const times = upsets.times(message);
      for (let i = 0; i < times; i += 1) link.send(message);
    }
  }

  function begin(trial: string | null): string {
    const run = `${life}-${runs}`;
    ledger.begin(run);
    live = startLiveRun({
      run, trial, clock, outbox, speed,
      source: options.source(runs, trial),
      onBatch(chunk) {
        ledger.add(run, chunk);
        pump();
      },
      onEnded(reason) {
        ledger.end(run, reason);
        live = null;
        tell({ type: 'ended', run, reason });
        pump();
        considerArmed();
        wake();
      },
    });
    runs += 1;
    tell({ type: 'began', run, trial });
    pump();
    return run;
  }

  /** After a break the server arms again what it finds armed; a trial that runs already is not begun twice. */
  function considerArmed(): void {
    if (armed === null || live !== null || nod !== undefined || state !== 'connected') return;
    const trial = armed;
    nod = setTimeout(() => {
      nod = undefined;
      if (armed !== trial || live !== null || state === 'closed') return;
      armed = null;
      begin(trial);
    }, human.between(...humanDelayMs) / speed);
  }

  function take(message: ServerMessage): void {
    if (message.type === 'clock') return link?.send({ type: 'clock', id: message.id, deviceUs: clock.nowUs() });
    const before = new Map(outbox.runs().map((each) => [each.run, each.state]));
    ledger.hear(message);
    outbox.take(message);
    switch (message.type) {
      case 'welcome':
        device = message.device;
        state = 'connected';
        waitMs = reconnectMs[0];
        tell({ type: 'connected', device });
        welcomed?.resolve();
        welcomed = null;
        break;
      case 'arm': {
        const going = outbox.runs().some(({ trial, state: of }) => trial === message.trial && of !== 'refused' && of !== 'finished');
        if (going || armed === message.trial) break;
        armed = message.trial;
        tell({ type: 'armed', trial: message.trial });
        considerArmed();
        break;
      }
      case 'disarm':
        if (armed === message.trial) armed = null;
        clearTimeout(nod);
        nod = undefined;
        tell({ type: 'disarmed', trial: message.trial });
        considerArmed();
        break;
      case 'stop':
        if (live?.run === message.run) live.stop('stopped');
        break;
      case 'fault':
        faults[message.code] = (faults[message.code] ?? 0) + 1;
        if (message.fatal) fatal = refusedFor(message.code);
        tell({ type: 'fault', code: message.code, message: message.message });
        break;
      default:
    }
    for (const { run, state: now } of outbox.runs()) if (before.get(run) !== now) settle(run, now);
    pump();
  }

  function settle(run: string, now: 'waiting' | 'begun' | 'refused' | 'finished'): void {
    if (now === 'refused') {
      if (live?.run === run) {
        live.abandon();
        live = null;
      }
      tell({ type: 'refused', run });
      considerArmed();
    }
    if (now === 'finished') {
      // The server closed it while it was still going: nothing more of it will be taken.
      if (live?.run === run) live.stop('stopped');
      tell({ type: 'closed', run });
    }
    if (now === 'refused' || now === 'finished') wake();
  }

  async function connectOnce(): Promise<void> {
    state = 'connecting';
    fatal = null;
    const opened = await openLink(url, key, silenceMs, {
      onMessage: take,
      onDrain: pump,
      onClosed: (refusal) => lost(refusal ?? fatal),
    });
    if ((state as SimulatedDevice['state']) === 'closed') return opened.cut();
    link = opened;
    connections += 1;
    state = 'greeting';
    opened.send({
      type: 'hello', link: 1, rig: options.rig, rateHz: options.rateHz ?? 1000, channels: [...options.channels],
      firmware: options.firmware ?? 'simulated', deviceUs: clock.nowUs(),
    });
    const breakMs = upsets.nextBreakMs();
    if (breakMs !== null) breaker = setTimeout(() => link?.cut(), breakMs);
  }

  function lost(refusal: LinkRefusal | null): void {
    clearTimeout(breaker);
    link = null;
    outbox.broken();
    if (state === 'closed') return wake();
    if (welcomed) {
      const reject = welcomed.reject;
      welcomed = null;
      state = 'idle';
      return reject(refusal ?? new LinkRefusal('UNREACHABLE', 'The server closed the link before it welcomed the device.', 'Look at the server’s log for the reason.', true));
    }
    if (refusal && !refusal.passing) return goneFor(refusal);
    state = 'away';
    tell({ type: 'away', refusal });
    again = setTimeout(() => {
      connectOnce().catch((error: unknown) => lost(error instanceof LinkRefusal ? error : new LinkRefusal('UNREACHABLE', String(error), 'Look at the device’s log.', true)));
    }, waitMs * patience.between(0.8, 1.2));
    waitMs = Math.min(2 * waitMs, reconnectMs[1]);
  }

  function goneFor(refusal: LinkRefusal): void {
    state = 'closed';
    clearTimeout(nod);
    live?.abandon();
    live = null;
    tell({ type: 'gone', refusal });
    wake();
  }

  const isSettled = (): boolean => state === 'closed' || (live === null && nod === undefined && outbox.empty());
  const until = (holds: () => boolean): Promise<void> => new Promise((resolve) => {
    const look = (): void => {
      if (!holds()) return;
      waiters.delete(look);
      resolve();
    };
    waiters.add(look);
    look();
  });

  return {
    get state() {
      return state;
    },
    connect() {
      if (state !== 'idle') return Promise.reject(new Error(`The device is ${state} already.`));
      return new Promise((resolve, reject) => {
        welcomed = { resolve, reject };
        connectOnce().catch((error: unknown) => {
          welcomed = null;
          state = 'idle';
          reject(error as Error);
        });
      });
    },
    startUnfiled() {
      if (live) throw new Error('A run is going on already.');
      return begin(null);
    },
    mark(label) {
      live?.mark(label);
      pump();
    },
    stop: (reason = 'stopped') => live?.stop(reason),
    breakLink: () => link?.cut(),
    samplesOf: (run) => ledger.samplesOf(run),
    report: () => ({ device, state, runs: outbox.runs().map((each) => ledger.reportOf(each)), connections, faults: { ...faults } }),
    settled: () => until(isSettled),
    async close(graceMs = 2000) {
      if (state === 'closed') return;
      clearTimeout(nod);
      nod = undefined;
      armed = null;
      live?.stop('stopped');
      let limit: NodeJS.Timeout | undefined;
      if (state === 'connected') await Promise.race([until(isSettled), new Promise((resolve) => (limit = setTimeout(resolve, graceMs)))]);
      clearTimeout(limit);
      clearTimeout(again);
      state = 'closed';
      if (link === null) return;
      link.close();
      await Promise.race([until(() => link === null), new Promise((resolve) => (limit = setTimeout(resolve, graceMs)))]);
      clearTimeout(limit);
      (link as Link | null)?.cut();
    },
  };
}

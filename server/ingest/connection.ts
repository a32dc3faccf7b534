/**
 * One connection of one device, as a state machine: greeting -> streaming -> closed.
 *
 * Messages of a connection are handled one after another, in the order they came, also where handling waits for the
 * database. A refused frame leaves everything as it was.
 */
import type { WebSocket } from 'ws';
import type { DeviceId, TrialId } from '@shared/api/common';
import { trialId } from '@shared/api/common';
import { parseChannels } from '@shared/recording';
import {
  addRoundTrip, type Batch, type Begin, type ClockFilter, decodeDeviceMessage, type DeviceMessage, encodeServerMessage, type End, estimateClock,
  type FaultCode, faultKinds, type Hello, type Mark, newClockFilter, type ServerMessage, wallTimeOf,
} from '@shared/link';
import { isFlaw } from './batch-check';
import type { RecorderParts, Recorder, RunListener } from './recorder';
import { type DeviceRow, findRigRevision, findRun, insertRecording, touchDevice } from './queries';
import type { Run } from './run';

type State = 'greeting' | 'streaming' | 'closed';

/** Server's wall clock in µs, rising smoothly between corrections of the system's clock. */
const serverUs = () => (performance.timeOrigin + performance.now()) * 1000;

export class Connection implements RunListener {
  state: State = 'greeting';
  rig: { code: string; revision: number } | null = null;
  heardAtMs = performance.now();
  private rigRevisionId = '';
  private channels: readonly string[] = [];
  private rateHz = 0;
  private firmware = '';
  private clock: ClockFilter = newClockFilter;
  private asked = new Map<number, number>();
  private clockId = 0;
  private faultsInARow = 0;
  private queue: Promise<void> = Promise.resolve();
  private paused = false;
  private unlisten: () => void = () => undefined;
  private timers: NodeJS.Timeout[] = [];
  private flagsToldMs = 0;

  constructor(
    private readonly socket: WebSocket,
    readonly device: DeviceRow,
    private readonly recorder: Recorder,
    private readonly parts: RecorderParts,
    private readonly onClosed: (connection: Connection) => void,
  ) {
    const { options } = parts;
    socket.on('message', (data, isBinary) => this.receive(data as Buffer, isBinary));
    socket.on('pong', () => this.heard());
    socket.on('error', () => undefined); // a broken socket closes, and closing is handled
    socket.on('close', () => this.closed());
    this.timers.push(setTimeout(() => {
      if (this.state === 'greeting') socket.close(1002, 'hello did not come');
    }, options.helloWithinMs));
    this.timers.push(setInterval(() => {
      const silentMs = performance.now() - this.heardAtMs;
      if (silentMs > options.silenceMs) socket.terminate();
      else socket.ping();
    }, options.pingEveryMs));
  }

  get deviceId(): DeviceId {
    return this.device.id as DeviceId;
  }

  /** Waits for the answer to a ping. @returns whether it came in time */
  answers(withinMs: number): Promise<boolean> {
    if (this.state === 'closed') return Promise.resolve(false);
    return new Promise((resolve) => {
      const late = setTimeout(() => { this.socket.off('pong', came); resolve(false); }, withinMs);
      const came = () => { clearTimeout(late); resolve(true); };
      this.socket.once('pong', came);
      this.socket.ping();
    });
  }

  send(message: ServerMessage): void {
    if (this.socket.readyState === this.socket.OPEN) this.socket.send(encodeServerMessage(message));
  }

  fault(code: FaultCode, message: string = faultKinds[code].sentence, about: { run?: string; n?: number } = {}): void {
    const { fatal, closeCode } = faultKinds[code];
    this.device.faults[code] = (this.device.faults[code] ?? 0) + 1;
    this.save({ faults: { ...this.device.faults } });
    this.send({ type: 'fault', code, message, fatal, ...about });
    this.faultsInARow += 1;
    if (fatal) this.socket.close(closeCode, code);
    else if (this.faultsInARow >= this.parts.options.faultsInARow) this.socket.close(faultKinds.MALFORMED.closeCode, 'too many refused frames');
  }

  terminate(): void {
    this.socket.terminate();
    this.closed();
  }

  private save(values: Parameters<typeof touchDevice>[2]): void {
    touchDevice(this.parts.db, this.device.id, values).catch((error: unknown) => {
      this.parts.log.warn({ message: error instanceof Error ? error.message.slice(0, 200) : '' }, 'a device’s state was not stored');
    });
  }

  private heard(): void {
    this.heardAtMs = performance.now();
  }

  private receive(data: Buffer, isBinary: boolean): void {
    this.heard();
    const arrivedUs = serverUs();
    if (this.state === 'closed') return;
    if (data.length > this.parts.options.frameBytes) return this.fault('FRAME_TOO_LARGE', `The frame has ${data.length} bytes; at most ${this.parts.options.frameBytes} are taken.`);
    if (!isBinary) return this.fault('MALFORMED', 'Frames of this link are binary.');
    const decoded = decodeDeviceMessage(data);
    if (!decoded.ok) {
      if (decoded.type === 'hello' && decoded.link !== undefined && decoded.link !== 1) return this.fault('LINK_VERSION');
      return this.fault('MALFORMED', decoded.problem, { ...(decoded.run === undefined ? {} : { run: decoded.run }), ...(decoded.n === undefined ? {} : { n: decoded.n }) });
    }
    const { message } = decoded;
    // A clock answer is worth its arrival time alone; everything else keeps its order.
    if (message.type === 'clock') return this.tookClock(message.id, message.deviceUs, arrivedUs);
    this.queue = this.queue.then(() => this.handle(message)).catch((error: unknown) => {
      this.parts.log.error({ message: error instanceof Error ? (error.cause instanceof Error ? error.cause.message : error.message).slice(0, 300) : '' }, 'a message of a device could not be handled');
      this.fault('STORAGE', undefined, 'run' in message ? { run: message.run } : {});
    });
  }

  private async handle(message: DeviceMessage): Promise<void> {
    if (this.state === 'closed') return;
    if (message.type === 'hello') return this.state === 'greeting' ? this.greet(message) : this.fault('MALFORMED', 'hello comes once, first.');
    if (this.state === 'greeting') return this.fault('MALFORMED', 'hello comes first.');
    if (message.type === 'begin') return this.begin(message);
    if (message.type === 'batch') return this.batch(message);
    if (message.type === 'mark') return this.mark(message);
    if (message.type === 'end') return this.end(message);
  }

  private async greet(hello: Hello): Promise<void> {
    const { db, options, book, bus } = this.parts;
    const revision = await findRigRevision(db, hello.rig.code, hello.rig.revision);
    if (revision === null) return this.fault('RIG_UNKNOWN', `There is no revision ${hello.rig.revision} of a rig ${hello.rig.code} in the book.`);
    if (hello.rig.code !== this.device.rigCode) return this.fault('RIG_MISMATCH', `This device is registered for ${this.device.rigCode}, not ${hello.rig.code}.`);
    const channels = parseChannels(hello.channels, revision.file.cables.length);
    if (!channels.ok) return this.fault('CHANNELS', channels.error.message);
    if (hello.channels.length > options.channelsMax) return this.fault('CHANNELS', `At most ${options.channelsMax} channels are taken.`);
    if (!(hello.rateHz >= options.rateMinHz && hello.rateHz <= options.rateMaxHz)) return this.fault('RATE', `The rate has to lie between ${options.rateMinHz} and ${options.rateMaxHz} Hz.`);
    this.rig = hello.rig;
    this.rigRevisionId = revision.id;
    this.channels = hello.channels;
    this.rateHz = hello.rateHz;
    this.firmware = hello.firmware;
    this.state = 'streaming';
    this.faultsInARow = 0;
    this.unlisten = this.recorder.listen(this.device.id, this);
    const runs = this.recorder.ofDevice(this.device.id);
    this.send({
      type: 'welcome', device: this.device.id, serverUs: serverUs(),
      limits: { batchSamples: options.batchSamples, frameBytes: options.frameBytes, unacked: options.unacked },
      resume: runs.filter((run) => run.ending === null).map((run) => ({ run: run.run, next: run.nextBatch })),
    });
    this.startClock();
    this.save({ lastSeenAt: new Date() });
    for (const run of runs) if (run.trialId !== null && run.ending === null) await book.back(run.trialId);
    bus.tell('device', { deviceId: this.deviceId, state: runs.length > 0 ? 'recording' : 'connected' });
    const armed = await book.armedOn(this.deviceId);
    if (armed !== null) this.send({ type: 'arm', trial: armed });
  }

  private startClock(): void {
    const { clockBurst, clockBurstEveryMs, clockEveryMs } = this.parts.options;
    let sent = 0;
    const burst = setInterval(() => {
      this.askClock();
      sent += 1;
      if (sent >= clockBurst) clearInterval(burst);
    }, clockBurstEveryMs);
    this.timers.push(burst, setInterval(() => this.askClock(), clockEveryMs));
    this.askClock();
  }

  private askClock(): void {
    this.clockId += 1;
    if (this.asked.size > 32) this.asked.clear();
    const now = serverUs();
    this.asked.set(this.clockId, now);
    this.send({ type: 'clock', id: this.clockId, serverUs: now });
  }

  private tookClock(id: number, deviceUs: number, answeredUs: number): void {
    const askedUs = this.asked.get(id);
    if (askedUs === undefined) return; // an answer to nothing we asked says nothing
    this.asked.delete(id);
    this.clock = addRoundTrip(this.clock, { askedUs, answeredUs, deviceUs });
    const estimate = estimateClock(this.clock, answeredUs);
    if (estimate !== null && this.clockId % this.parts.options.clockBurst === 0) {
      this.save({ clock: { offsetUs: estimate.offsetUs, uncertaintyUs: estimate.uncertaintyUs, driftPpm: estimate.driftPpm }, lastSeenAt: new Date() });
    }
  }

  private async begin({ run, trial, startUs }: Begin): Promise<void> {
    const { db, book, bus, options } = this.parts;
    const known = this.recorder.find(this.device.id, run);
    if (known !== undefined) return this.send({ type: 'ack', run, next: known.durable });
    const stored = await findRun(db, this.device.id, run);
    if (stored !== null) return this.fault('RUN_CLOSED', undefined, { run });
    if (this.recorder.ofDevice(this.device.id).length >= options.openRuns) return this.fault('DEVICE_BUSY', 'Too many runs of this device are open; end one first.', { run });
    let forTrial: TrialId | null = null;
    if (trial !== null) {
      const id = trialId.safeParse(trial);
      const answer = id.success ? await book.mayBegin(this.deviceId, id.data) : 'unknown';
      if (answer === 'unknown' || !id.success) return this.fault('TRIAL_UNKNOWN', undefined, { run });
      if (answer === 'not-armed') return this.fault('TRIAL_NOT_ARMED', undefined, { run });
      forTrial = id.data;
    }
    const estimate = estimateClock(this.clock, serverUs());
    const wall = estimate === null ? null : wallTimeOf(estimate, startUs);
    const row = await insertRecording(db, {
      deviceId: this.device.id, run, trialId: forTrial, rigRevisionId: this.rigRevisionId, rateHz: this.rateHz, channels: [...this.channels],
      firmware: this.firmware, startUs: Math.round(startUs), startedAt: new Date((wall?.serverUs ?? serverUs()) / 1000), startUncertaintyUs: wall?.uncertaintyUs ?? null,
    });
    const added = await this.recorder.add(row);
    if (forTrial !== null) await book.began(forTrial, added.id);
    this.faultsInARow = 0;
    bus.tell('device', { deviceId: this.deviceId, state: 'recording' });
    this.send({ type: 'ack', run, next: 0 });
  }

  /** The run a message is about, or the fault that says why not. */
  private async runOf(run: string, n?: number): Promise<Run | null> {
    const known = this.recorder.find(this.device.id, run);
    if (known !== undefined && known.ending === null) return known;
    const closed = known !== undefined || (await findRun(this.parts.db, this.device.id, run)) !== null;
    this.fault(closed ? 'RUN_CLOSED' : 'RUN_UNKNOWN', undefined, { run, ...(n === undefined ? {} : { n }) });
    return null;
  }

  private async batch(batch: Batch): Promise<void> {
    const run = this.recorder.find(this.device.id, batch.run);
    if (run === undefined || run.ending !== null) {
      await this.runOf(batch.run, batch.n);
      return;
    }
    if (batch.n < run.nextBatch) {
      if (batch.n < run.durable) this.send({ type: 'ack', run: run.run, next: run.durable });
      return;
    }
    if (batch.n > run.nextBatch) return this.fault('BATCH_ORDER', `Batch ${run.nextBatch} is wanted, this is ${batch.n}.`, { run: run.run, n: run.nextBatch });
    const taken = run.take(batch);
    if (isFlaw(taken)) return this.fault(taken.code, taken.message, { run: run.run, n: batch.n });
    this.faultsInARow = 0;
    run.heardAtMs = this.heardAtMs;
    this.recorder.wake();
    this.tellRooms(run, run.chunkOf(taken));
    if (run.freshBytes > this.parts.options.pendingBytesOfRun || this.recorder.waitingBytes > this.parts.options.pendingBytes) this.pause();
  }

  private tellRooms(run: Run, chunk: ReturnType<Run['chunkOf']>): void {
    const { trialId: trial } = run;
    if (trial === null) return;
    const { bus } = this.parts;
    bus.tell('samples', { trialId: trial, recordingId: run.id, channels: run.channels, rateHz: run.rateHz, chunk, arrivedUs: serverUs() });
    if (run.flagger === null) return;
    const ended = run.flagger.step(chunk);
    run.ended.push(...ended.map((flag) => ({ ...flag, open: false })));
    const now = performance.now();
    if (ended.length === 0 && now - this.flagsToldMs < 100) return;
    const open = run.flagger.open();
    if (ended.length === 0 && open.length === 0 && run.openTold === 0) return;
    this.flagsToldMs = now;
    run.openTold = open.length;
    bus.tell('liveFlags', { trialId: trial, flags: [...run.ended, ...open.map((flag) => ({ ...flag, open: true }))] });
  }

  private async mark({ run: name, atUs, label }: Mark): Promise<void> {
    const run = await this.runOf(name);
    if (run === null) return;
    const atS = (atUs - run.startUs) / 1e6;
    if (atS < 0) return this.fault('MALFORMED', 'The mark lies before the start of its run.', { run: name });
    run.mark(atS, label);
    this.recorder.wake();
    if (run.trialId !== null) this.parts.bus.tell('mark', { trialId: run.trialId, atS, label });
  }

  private async end({ run: name, batches, samples, reason }: End): Promise<void> {
    const stored = this.recorder.find(this.device.id, name) ?? (await findRun(this.parts.db, this.device.id, name));
    // Sent again after a break: what is closed is closed, and that is what the device wants to hear.
    if (stored !== null && 'state' in stored && stored.state === 'closed') return this.send({ type: 'ack', run: name, next: stored.nextBatch, ended: true });
    const run = this.recorder.find(this.device.id, name);
    if (run === undefined) return this.fault('RUN_UNKNOWN', undefined, { run: name });
    if (batches !== run.nextBatch) return this.fault('BATCH_ORDER', `The run has ${batches} batches, batch ${run.nextBatch} is wanted next.`, { run: name, n: run.nextBatch });
    if (samples < run.nextSample) return this.fault('BATCH_SIZE', `The run says ${samples} samples, but its batches reach ${run.nextSample}.`, { run: name });
    run.ending = { reason, acknowledge: true };
    this.recorder.wake();
  }

  acknowledged(run: Run): void {
    this.send({ type: 'ack', run: run.run, next: run.durable });
    if (this.paused && run.freshBytes < this.parts.options.pendingBytesOfRun / 2 && this.recorder.waitingBytes < this.parts.options.pendingBytes / 2) this.resume();
  }

  closed(run?: Run): void {
    if (run !== undefined) {
      this.send({ type: 'ack', run: run.run, next: run.durable, ended: true });
      if (this.state === 'streaming' && this.recorder.ofDevice(this.device.id).length === 0) this.parts.bus.tell('device', { deviceId: this.deviceId, state: 'connected' });
      return;
    }
    if (this.state === 'closed') return;
    const wasStreaming = this.state === 'streaming';
    this.state = 'closed';
    this.timers.forEach((timer) => clearInterval(timer));
    this.unlisten();
    this.onClosed(this);
    if (!wasStreaming) return;
    this.save({ lastSeenAt: new Date() });
    this.parts.bus.tell('device', { deviceId: this.deviceId, state: 'gone' });
    for (const each of this.recorder.ofDevice(this.device.id)) {
      if (each.trialId !== null && each.ending === null) {
        this.parts.book.away(each.trialId).catch(() => this.parts.log.warn('a trial could not be marked as away'));
      }
    }
  }

  storageDown(): void {
    this.fault('STORAGE');
    this.send({ type: 'pace', unacked: this.parts.options.unackedWhenSlow });
  }

  storageBack(): void {
    this.send({ type: 'pace', unacked: this.parts.options.unacked });
    this.resume();
  }

  private pause(): void {
    if (this.paused) return;
    this.paused = true;
    this.socket.pause();
  }

  private resume(): void {
    if (!this.paused) return;
    this.paused = false;
    this.socket.resume();
  }
}

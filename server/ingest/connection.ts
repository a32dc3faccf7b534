/**
 * One connection of one device, as a state machine: greeting -> streaming -> closing -> closed.
 *
 * Messages of a connection are handled one after another, in the order they came, also where handling waits for the
 * database. A refused frame leaves everything as it was.
 */
import type { WebSocket } from 'ws';
import { trialId as asTrialId, type DeviceId, type TrialId } from '@shared/api/common';
import {
  type Batch, type Begin, type ClockEstimate, decodeDeviceMessage, type DeviceMessage, encodeServerMessage, type End,
  type FaultCode, faultKinds, type Hello, type Mark, type ServerMessage, type WallTime,
} from '@shared/link';
import { ClockWatch } from './clock-watch';
import { DeviceRecord } from './device-record';
import { faultText } from './fault-text';
import { checkHello, type Announced } from './hello-check';
import type { Recorder, RecorderParts, RunListener } from './recorder';
import { type DeviceRow, findRun, insertRecording, type RecordingRow } from './queries';
import type { Run } from './run';
import { foldFlags, tellFlags } from './run-flags';
import { serverUs } from './server-clock';

type State = 'greeting' | 'streaming' | 'closing' | 'closed';

interface About { run?: string; n?: number }

export class Connection implements RunListener {
  state: State = 'greeting';
  announced: Announced | null = null;
  private heardAtMs = performance.now();
  private readonly clock: ClockWatch;
  private readonly record: DeviceRecord;
  private faultsInARow = 0;
  /** Number of the last batch that was ahead of its turn, by run: the rest of the same flight needs no fault each. */
  private readonly ahead = new Map<string, number>();
  private handling = false;
  private readonly waiting: { message: DeviceMessage; bytes: number }[] = [];
  private waitingBytes = 0;
  private paused = false;
  private quiet = false;
  private flagsToldMs = 0;
  private unlisten: () => void = () => undefined;
  private readonly timers: NodeJS.Timeout[];

  constructor(
    private readonly socket: WebSocket,
    readonly device: DeviceRow,
    private readonly recorder: Recorder,
    private readonly parts: RecorderParts,
    private readonly onClosed: (connection: Connection) => void,
  ) {
    const { options } = parts;
    this.record = new DeviceRecord(device, parts.db, parts.log);
    this.clock = new ClockWatch(options, (message) => this.send(message), (estimate) => this.tookEstimate(estimate));
    socket.on('message', (data, isBinary) => this.receive(data as Buffer, isBinary));
    socket.on('pong', () => this.heard());
    socket.on('error', () => undefined); // a broken socket closes, and closing is handled
    socket.on('close', () => this.gone());
    this.timers = [
      setTimeout(() => {
        if (this.state === 'greeting') this.fault('MALFORMED', `hello did not come within ${options.helloWithinMs} ms.`, {}, true);
      }, options.helloWithinMs),
      setInterval(() => this.watch(), options.pingEveryMs),
    ];
  }

  get deviceId(): DeviceId {
    return this.device.id as DeviceId;
  }

  /** Runs that this connection streams. */
  get streams(): Run[] {
    return this.recorder.ofDevice(this.device.id).filter((run) => run.by === this && run.ending === null);
  }

  /** Waits for the answer to a ping. @returns whether it came in time */
  answers(withinMs: number): Promise<boolean> {
    if (this.state === 'closed') return Promise.resolve(false);
    return new Promise((resolve) => {
      const late = setTimeout(() => {
        this.socket.off('pong', came);
        resolve(false);
      }, withinMs);
      const came = () => {
        clearTimeout(late);
        resolve(true);
      };
      this.socket.once('pong', came);
      this.socket.ping();
    });
  }

  send(message: ServerMessage): void {
    if (this.socket.readyState === this.socket.OPEN) this.socket.send(encodeServerMessage(message));
  }

  /** Tells the device what it did wrong and counts it. @param cut closes the connection whatever the code's kind */
  fault(code: FaultCode, message: string = faultKinds[code].sentence, about: About = {}, cut = false): void {
    this.record.fault(code);
    this.faultsInARow += 1;
    const fatal = cut || faultKinds[code].fatal || this.faultsInARow >= this.parts.options.faultsInARow;
    this.refused(code, message, about, fatal);
  }

  /** Counts what another connection of the device did wrong. */
  count(code: FaultCode): void {
    this.record.fault(code);
  }

  /** As `fault`, for one frame: also a code that is fatal elsewhere leaves the connection open here. */
  private refuseFrame(code: FaultCode, message: string, about: About): void {
    this.record.fault(code);
    this.faultsInARow += 1;
    this.refused(code, message, about, this.faultsInARow >= this.parts.options.faultsInARow);
  }

  private refused(code: FaultCode, message: string, about: About, fatal: boolean): void {
    this.send({ type: 'fault', code, message, fatal, ...about });
    if (!fatal) return;
    if (this.state !== 'closed') this.state = 'closing';
    this.socket.close(faultKinds[code].closeCode, code);
  }

  /** Cuts the connection. @param quiet nothing is told: the server itself stops */
  terminate(quiet = false): Promise<void> {
    this.quiet = quiet;
    this.socket.terminate();
    this.gone();
    return this.record.write();
  }

  private heard(): void {
    this.heardAtMs = performance.now();
  }

  private watch(): void {
    const { silenceMs } = this.parts.options;
    // A socket that we do not read cannot be heard.
    if (!this.paused && performance.now() - this.heardAtMs > silenceMs) this.socket.terminate();
    else if (this.socket.readyState === this.socket.OPEN) this.socket.ping();
  }

  private receive(data: Buffer, isBinary: boolean): void {
    this.heard();
    const arrivedUs = serverUs();
    if (this.state === 'closed' || this.state === 'closing') return;
    const { frameBytes, queuedBytes } = this.parts.options;
    if (data.length > frameBytes) return this.fault('FRAME_TOO_LARGE', `The frame has ${data.length} bytes; at most ${frameBytes} are taken.`);
    if (!isBinary) return this.fault('MALFORMED', 'Frames of this link are binary.');
    const decoded = decodeDeviceMessage(data);
    if (!decoded.ok) {
      if (decoded.type === 'hello' && decoded.link !== undefined && decoded.link !== 1) return this.fault('LINK_VERSION');
      return this.fault('MALFORMED', decoded.problem, { ...(decoded.run === undefined ? {} : { run: decoded.run }), ...(decoded.n === undefined ? {} : { n: decoded.n }) });
    }
    const { message } = decoded;
    // A clock answer is worth its arrival time alone; everything else keeps its order.
    if (message.type === 'clock') return this.clock.answer(message.id, message.deviceUs, arrivedUs);
    if (!this.handling) return this.handle(message);
    this.waiting.push({ message, bytes: data.length });
    this.waitingBytes += data.length;
    if (this.waitingBytes > queuedBytes) this.pause();
  }

  private handle(message: DeviceMessage): void {
    const work = this.dispatch(message);
    if (work === undefined) return;
    this.handling = true;
    work
      .catch((error: unknown) => {
        this.parts.log.error({ message: faultText(error), type: message.type }, 'a message of a device could not be handled');
        // Only the sender can repeat it: the connection is closed, and the device begins again from what is durable.
        this.fault('STORAGE', undefined, 'run' in message ? { run: message.run } : {}, true);
      })
      .finally(() => {
        this.handling = false;
        this.handleWaiting();
      });
  }

  private handleWaiting(): void {
    while (!this.handling) {
      const next = this.waiting.shift();
      if (next === undefined) break;
      this.waitingBytes -= next.bytes;
      this.handle(next.message);
    }
    this.considerResume();
  }

  /** @returns a promise where the message has to wait for the database */
  private dispatch(message: DeviceMessage): Promise<void> | undefined {
    if (this.state === 'closed' || this.state === 'closing') return undefined;
    if (message.type === 'hello') {
      if (this.state === 'greeting') return this.greet(message);
      this.fault('MALFORMED', 'hello comes once, first.');
      return undefined;
    }
    if (this.state === 'greeting') {
      this.fault('MALFORMED', 'hello comes first.');
      return undefined;
    }
    switch (message.type) {
      case 'begin': return this.begin(message);
      case 'batch': return this.batch(message);
      case 'mark': return this.mark(message);
      case 'end': return this.end(message);
      case 'clock': return undefined;
    }
  }

  private async greet(hello: Hello): Promise<void> {
    const { db, options, book, bus } = this.parts;
    const checked = await checkHello(db, hello, this.device, options);
    if ('code' in checked) return this.fault(checked.code, checked.message);
    const runs = await this.recorder.refresh(this.device.id);
    if (this.socket.readyState !== this.socket.OPEN) return;
    this.announced = checked;
    this.state = 'streaming';
    this.faultsInARow = 0;
    this.unlisten = this.recorder.listen(this.device.id, this);
    this.send({
      type: 'welcome', device: this.device.id, serverUs: serverUs(),
      limits: { batchSamples: options.batchSamples, frameBytes: options.frameBytes, unacked: options.unacked },
      // Durable, not received: a device may forget what is below.
      resume: runs.map((run) => ({ run: run.run, next: run.durable })),
    });
    if (this.recorder.storageIsDown) this.storageDown();
    this.clock.start();
    this.record.set({});
    bus.tell('device', { deviceId: this.deviceId, state: 'connected' });
    const armed = await book.armedOn(this.deviceId);
    if (armed !== null) this.send({ type: 'arm', trial: armed });
  }

  private tookEstimate({ offsetUs, uncertaintyUs, driftPpm }: ClockEstimate): void {
    this.record.set({ clock: { offsetUs, uncertaintyUs, driftPpm } });
    for (const run of this.streams) this.improveWall(run);
  }

  /** A moment of the device's clock by the server's. None that is still to come: a clock that says so is wrong. */
  private wallOf(deviceUs: number): WallTime | null {
    const wall = this.clock.wallTime(deviceUs);
    return wall === null || wall.serverUs - wall.uncertaintyUs > serverUs() ? null : wall;
  }

  /** The start of a run by the server's clock, as sharp as it was ever known. */
  private improveWall(run: Run): void {
    const wall = this.wallOf(run.startUs);
    if (wall !== null && (run.wall === null || wall.uncertaintyUs < run.wall.uncertaintyUs)) run.wall = wall;
  }

  private async begin({ run: name, trial, startUs }: Begin): Promise<void> {
    const { db, book, options } = this.parts;
    const { announced } = this;
    if (announced === null) return;
    const known = this.recorder.find(this.device.id, name);
    if (known !== undefined) {
      if (known.ending === null) await this.goOn(known);
      return this.send({ type: 'ack', run: name, next: known.durable });
    }
    const stored = await findRun(db, this.device.id, name);
    // Stored and growing but not taken up: an earlier begin broke off halfway, and a new hello takes it up.
    if (stored?.state === 'growing') return this.fault('STORAGE', undefined, { run: name }, true);
    // The same run once more: its device did not hear that it is closed. Another one of the same name is refused.
    if (stored?.startUs === Math.round(startUs)) return this.send({ type: 'ack', run: name, next: stored.nextBatch, ended: true });
    if (stored !== null) return this.fault('RUN_CLOSED', undefined, { run: name });
    if (this.recorder.ofDevice(this.device.id).length >= options.openRuns) return this.refuseFrame('DEVICE_BUSY', `${options.openRuns} runs of this device are open; end one first.`, { run: name });
    let forTrial: TrialId | null = null;
    if (trial !== null) {
      const id = asTrialId.safeParse(trial);
      const answer = id.success ? await book.mayBegin(this.deviceId, id.data) : 'unknown';
      if (answer === 'unknown' || !id.success) return this.refuseFrame('TRIAL_UNKNOWN', faultKinds.TRIAL_UNKNOWN.sentence, { run: name });
      if (answer === 'not-armed') return this.refuseFrame('TRIAL_NOT_ARMED', faultKinds.TRIAL_NOT_ARMED.sentence, { run: name });
      forTrial = id.data;
    }
    const wall = this.wallOf(startUs);
    const row = await insertRecording(db, {
      deviceId: this.device.id, run: name, trialId: forTrial, rigRevisionId: announced.rigRevisionId, rateHz: announced.rateHz, channels: [...announced.channels],
      firmware: announced.firmware, startUs: Math.round(startUs), startedAt: new Date((wall?.serverUs ?? serverUs()) / 1000), startUncertaintyUs: wall?.uncertaintyUs ?? null,
    });
    const run = await this.recorder.add(row);
    run.wall = wall;
    if (forTrial !== null) await book.began(forTrial, run.id);
    this.faultsInARow = 0;
    this.takeOver(run);
    this.send({ type: 'ack', run: name, next: 0 });
  }

  /** This connection streams the run from now on. */
  private takeOver(run: Run): void {
    if (this.state !== 'streaming') return;
    run.by = this;
    run.heardAtMs = performance.now();
    this.parts.bus.tell('device', { deviceId: this.deviceId, state: 'recording' });
  }

  private async goOn(run: Run): Promise<void> {
    if (run.by === this) return;
    this.takeOver(run);
    if (run.trialId !== null) await this.parts.book.back(run.trialId);
  }

  /** A message about a run that takes no more. What is in the book, or on its way there, is no fault; anything else is refused. */
  private async noRun(name: string, isIn: (run: { nextBatch: number; marks: RecordingRow['marks']; startUs: number }) => boolean, n?: number): Promise<void> {
    const about = { run: name, ...(n === undefined ? {} : { n }) };
    const ending = this.recorder.find(this.device.id, name);
    if (ending !== undefined) {
      if (!isIn(ending)) this.fault('RUN_CLOSED', undefined, about); // else the acknowledgement of its end follows
      return;
    }
    const stored = await findRun(this.parts.db, this.device.id, name);
    if (stored === null) this.fault('RUN_UNKNOWN', undefined, about);
    else if (stored.state === 'closed' && isIn(stored)) this.send({ type: 'ack', run: name, next: stored.nextBatch, ended: true });
    else this.fault('RUN_CLOSED', undefined, about);
  }

  private batch(batch: Batch): Promise<void> | undefined {
    const run = this.recorder.find(this.device.id, batch.run);
    if (run === undefined || run.ending !== null) return this.noRun(batch.run, ({ nextBatch }) => batch.n < nextBatch, batch.n);
    if (run.by !== this) return this.goOn(run).then(() => this.take(run, batch));
    this.take(run, batch);
    return undefined;
  }

  private take(run: Run, batch: Batch): void {
    const { options } = this.parts;
    const { n } = batch;
    if (n < run.nextBatch) {
      if (n < run.durable) this.send({ type: 'ack', run: run.run, next: run.durable });
      return;
    }
    if (n > run.nextBatch) {
      const sameFlight = this.ahead.get(run.run) === n - 1;
      this.ahead.set(run.run, n);
      if (!sameFlight) this.fault('BATCH_ORDER', `Batch ${run.nextBatch} is wanted next, this is ${n}.`, { run: run.run, n: run.nextBatch });
      return;
    }
    const taken = run.take(batch);
    if ('code' in taken) {
      // What was sent behind it in the same flight will be ahead of its turn.
      this.ahead.set(run.run, n);
      return this.refuseFrame(taken.code, taken.message, { run: run.run, n });
    }
    this.ahead.delete(run.run);
    this.faultsInARow = 0;
    this.recorder.wake();
    this.tellRooms(run, taken);
    if (run.freshBytes > options.pendingBytesOfRun || this.recorder.waitingBytes > options.pendingBytes) this.pause();
  }

  private tellRooms(run: Run, chunk: Exclude<ReturnType<Run['take']>, { code: FaultCode }>): void {
    if (run.trialId === null) return;
    const { bus, log, options } = this.parts;
    bus.tell('samples', { trialId: run.trialId, recordingId: run.id, channels: run.channels, rateHz: run.rateHz, chunk, arrivedUs: serverUs() });
    const ended = foldFlags(run, chunk, log);
    const now = performance.now();
    if (ended === 0 && now - this.flagsToldMs < options.flagsToldEveryMs) return;
    this.flagsToldMs = now;
    if (ended > 0 || run.openTold > 0 || (run.flagger?.open().length ?? 0) > 0) tellFlags(run, bus, false);
  }

  private mark({ run: name, atUs, label }: Mark): Promise<void> | undefined {
    const run = this.recorder.find(this.device.id, name);
    if (run === undefined || run.ending !== null) return this.noRun(name, ({ marks, startUs }) => marks.some((each) => each.atS === (atUs - startUs) / 1e6 && each.label === label));
    const atS = (atUs - run.startUs) / 1e6;
    if (atS < 0) {
      this.fault('MALFORMED', 'The mark lies before the start of its run.', { run: name });
      return undefined;
    }
    if (!run.mark(atS, label)) return undefined;
    this.recorder.wake();
    if (run.trialId !== null) this.parts.bus.tell('mark', { trialId: run.trialId, atS, label });
    return undefined;
  }

  private async end({ run: name, batches, samples, reason }: End): Promise<void> {
    const run = this.recorder.find(this.device.id, name);
    if (run === undefined) {
      const stored = await findRun(this.parts.db, this.device.id, name);
      if (stored === null) return this.fault('RUN_UNKNOWN', undefined, { run: name });
      // Sent again after a break: it is closed, and that is what the device wants to hear.
      return this.send({ type: 'ack', run: name, next: stored.nextBatch, ended: true });
    }
    if (run.ending !== null) return;
    if (batches !== run.nextBatch) return this.fault('BATCH_ORDER', `The run has ${batches} batches, batch ${run.nextBatch} is wanted next.`, { run: name, n: run.nextBatch });
    // Lost samples may be counted or not, and some may be lost behind the last batch.
    if (samples < run.samples) return this.fault('BATCH_SIZE', `The run says ${samples} samples, but its batches hold ${run.samples}.`, { run: name });
    this.improveWall(run);
    this.faultsInARow = 0;
    this.recorder.end(run, reason);
  }

  acknowledged(run: Run): void {
    this.send({ type: 'ack', run: run.run, next: run.durable });
    this.considerResume();
  }

  ended(run: Run): void {
    this.send({ type: 'ack', run: run.run, next: run.durable, ended: true });
    this.ahead.delete(run.run);
    if (this.state === 'streaming' && this.streams.length === 0) this.parts.bus.tell('device', { deviceId: this.deviceId, state: 'connected' });
  }

  storageDown(): void {
    this.record.fault('STORAGE');
    this.send({ type: 'fault', code: 'STORAGE', message: faultKinds.STORAGE.sentence, fatal: false });
    this.send({ type: 'pace', unacked: this.parts.options.unackedWhenSlow });
  }

  storageBack(): void {
    this.send({ type: 'pace', unacked: this.parts.options.unacked });
    this.considerResume();
  }

  private pause(): void {
    if (this.paused) return;
    this.paused = true;
    this.socket.pause();
  }

  private considerResume(): void {
    const { pendingBytes, pendingBytesOfRun, queuedBytes } = this.parts.options;
    const roomy = this.waitingBytes <= queuedBytes / 2 && this.recorder.waitingBytes <= pendingBytes / 2
      && this.recorder.ofDevice(this.device.id).every((run) => run.freshBytes <= pendingBytesOfRun / 2);
    if (!this.paused || !roomy) return;
    this.paused = false;
    this.heard();
    this.socket.resume();
  }

  private gone(): void {
    if (this.state === 'closed') return;
    const wasStreaming = this.announced !== null;
    const streams = this.recorder.ofDevice(this.device.id).filter((run) => run.by === this);
    this.state = 'closed';
    this.timers.forEach((timer) => clearInterval(timer));
    this.clock.stop();
    this.unlisten();
    for (const run of streams) run.by = null;
    this.onClosed(this);
    if (this.quiet) return;
    void this.record.write();
    if (!wasStreaming) return;
    this.parts.bus.tell('device', { deviceId: this.deviceId, state: 'gone' });
    for (const { trialId, ending } of streams) {
      if (trialId !== null && ending === null) this.parts.book.away(trialId).catch((error: unknown) => this.parts.log.warn({ message: faultText(error) }, 'a trial could not be marked as away'));
    }
  }
}

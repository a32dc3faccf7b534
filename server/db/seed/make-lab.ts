/** Makes the demo lab through the product's own services, so that it obeys the rules that every lab obeys. */
import { readFileSync } from 'node:fs';
import { fileURLToPath } from 'node:url';
import { v7 } from 'uuid';
import type { Logger } from 'pino';
import { type DeviceId, recordingId, type TrialId } from '@shared/api/common';
import type { RigRevision } from '@shared/api/rigs';
import type { Study } from '@shared/api/studies';
import { rigFileSchema, rigModel, type RigFile } from '@shared/rig';
import type { SignedIn } from '../../auth';
import { createTrialBook } from '../../features/sessions';
import { type DeviceControl, type TrialBook, writeRecording } from '../../ingest';
import { createBus } from '../../live/bus';
import { createServices, noDevices, type Services } from '../../services';
import { simulateRun, type Truth } from '../../simulator';
import type { Database } from '../engine';
import { cast, type CastName, demoPassword } from './cast';
import { heronAtFirst } from './first-revision';
import { type DemoNote, type DemoSession, demoStudies, type DemoStudy, type DemoTrial } from './programme';

export const rigPath = (code: string): string => fileURLToPath(new URL(`../../../samples/rigs/${code}.json`, import.meta.url));
const rigFile = (code: string): RigFile => rigFileSchema.parse(JSON.parse(readFileSync(rigPath(code), 'utf8')));

const minuteMs = 60_000;
const hourMs = 60 * minuteMs;
const demoMail = { smtp: undefined, mailFrom: 'Tautbook <lab@tautbook.example>', authSecret: undefined };

export type Made = { deviceName: string; deviceKey: string };

/** @param nowMs wall time around which the lab's days lie */
export async function makeDemoLab(db: Database, nowMs: number, log: Logger, onProgress: (what: string) => void): Promise<Made> {
  const lab = new DemoLabMaker(db, nowMs, log);
  await lab.open();
  for (const study of demoStudies) {
    onProgress(`Making the study ${study.code}…`);
    await lab.study(study);
  }
  return lab.device();
}

class DemoLabMaker {
  /** The services' clock: each thing happens at its own time, not at the time of seeding. */
  #atMs: number;
  #services!: Services;
  #book!: TrialBook;
  readonly #people = new Map<CastName, SignedIn>();
  readonly #rigs = new Map<string, RigRevision>();
  readonly #benches = new Map<string, { id: DeviceId; name: string; key: string }>();

  /** Rig that the session at hand is recorded on. */
  #mounted: { code: string; revision: number } | null = null;

  constructor(private readonly db: Database, private readonly nowMs: number, private readonly log: Logger) {
    this.#atMs = nowMs;
  }

  async open(): Promise<void> {
    const now = () => new Date(this.#atMs);
    const bus = createBus((error) => this.log.warn({ message: String(error) }, 'a listener failed while the demo lab was made'));
    this.#services = await createServices({ db: this.db, bus, control: this.#control(), log: this.log, config: demoMail, publicUrl: () => 'http://localhost', now });
    this.#book = createTrialBook(this.db, bus, now);
    for (const [name, person] of Object.entries(cast)) this.#people.set(name as CastName, await this.#services.people.makePerson({ ...person, password: demoPassword }));
    const administrator = this.#person('administrator');
    const heron = rigFile('heron-8');
    await this.#import(heronAtFirst(heron), 'As built.', administrator);
    await this.#import(heron, 'Exits of cables 2 and 6 measured again after the hum of visit SG-02.', this.#person('lead'));
    await this.#import(rigFile('wren-8'), 'As built.', administrator);
    await this.#register('heron-8', 'Heron on bench 1');
    await this.#register('wren-8', 'Wren by the window');
    const retired = await this.#services.devices.register('Heron, old controller', this.#rig('heron-8', 2).rigId);
    await this.#services.devices.revoke(retired.device.id);
  }

  device(): Made {
    const { name, key } = this.#bench('heron-8');
    return { deviceName: name, deviceKey: key };
  }

  async study(plan: DemoStudy): Promise<void> {
    const { studies } = this.#services;
    const lead = this.#person('lead');
    const made = await studies.create({ ...plan, conditions: [...plan.conditions], tasks: [...plan.tasks] }, lead);
    await studies.change({ studyId: made.id, role: 'lead', blind: false }, { state: 'running' }, lead);
    for (const { who, role, blind } of plan.members) if (who !== 'lead') await studies.setMember(made.id, this.#person(who).id, role, blind);
    const participants = new Map<string, Awaited<ReturnType<typeof studies.addParticipant>>>();
    for (const participant of plan.participants) participants.set(participant.code, await studies.addParticipant(made.id, participant));
    for (const session of plan.sessions) {
      const participant = participants.get(session.participant);
      if (!participant) throw new Error(`Participant ${session.participant} is not in ${plan.code}`);
      await this.#session(made, participant.id, session);
    }
  }

  async #session(study: Study, participant: Parameters<Services['sessions']['plan']>[1]['participantId'], plan: DemoSession): Promise<void> {
    const { sessions, sessionReader } = this.#services;
    const by = this.#person(plan.by);
    const startMs = this.#timeOf(plan.when);
    const rig = this.#rig(plan.rig.code, plan.rig.revision);
    this.#atMs = Math.min(startMs, this.nowMs) - 26 * hourMs;
    const id = await sessions.plan(study.id, {
      participantId: participant, rigRevisionId: rig.id, plannedAt: new Date(startMs).toISOString(),
      trials: plan.trials.map((trial) => ({ taskId: idOf(study.tasks, trial.task), conditionId: idOf(study.conditions, trial.condition) })),
    }, by);
    const { trials } = await sessionReader.get(id, { blind: false });
    this.#atMs = startMs;
    this.#mounted = plan.rig;
    for (const [i, trial] of plan.trials.entries()) {
      if (trial.run) await this.#record(trials[i]!.id, rig, trial, trial.run, by);
    }
    if (plan.closed) await sessions.close(id, by);
  }

  async #record(trial: TrialId, rig: RigRevision, { task }: DemoTrial, plan: NonNullable<DemoTrial['run']>, by: SignedIn): Promise<void> {
    const { sessions } = this.#services;
    const bench = this.#bench(rig.code);
    const run = simulateRun({ rig: rigModel(rig.file), task, seed: plan.seed, durationS: plan.durationS, troubles: plan.troubles });
    const chunks = [...run];
    await sessions.arm(trial, bench.id, by);
    this.#atMs += 4_000;
    const startedAt = new Date(this.#atMs);
    const recording = await writeRecording(this.db, {
      deviceId: bench.id, run: `demo-${plan.seed}`, trialId: trial, rigRevisionId: rig.id, rateHz: run.rateHz, channels: [...run.channels],
      firmware: 'tautbook simulated device', startedAt, startUncertaintyUs: 180, marks: run.marks.map((mark) => ({ ...mark })),
    }, chunks);
    const recorded = recordingId.parse(recording.id);
    await this.#book.began(trial, recorded);
    this.#atMs += plan.durationS * 1000;
    await this.#book.stopped(trial, recorded, 'done');
    this.#atMs += 20_000;
    if (plan.outcome) await sessions.judge(trial, { reason: '', ...plan.outcome }, by);
    const endedMs = this.#atMs;
    for (const note of plan.notes ?? []) await this.#write(trial, note, run.truth, plan.durationS);
    this.#atMs = endedMs + 2 * minuteMs;
  }

  async #write(trial: TrialId, plan: DemoNote, truth: readonly Truth[], durationS: number): Promise<void> {
    const { notes } = this.#services;
    const place = placeOf(plan, truth, durationS);
    this.#later(3);
    const note = await notes.add(trial, { ...place, text: plan.text, clientKey: v7() }, this.#person(plan.by));
    for (const { by, text } of plan.replies ?? []) {
      this.#later(40);
      await notes.reply(note.id, { text, clientKey: v7() }, this.#person(by));
    }
    if (plan.resolvedBy) {
      this.#later(15);
      await notes.resolve(note.id, true, this.#person(plan.resolvedBy));
    }
  }

  /** Some minutes pass, but nothing happens in the future. */
  #later(minutes: number): void {
    this.#atMs = Math.min(this.#atMs + minutes * minuteMs, this.nowMs);
  }

  #timeOf(when: DemoSession['when']): number {
    if ('fromNowH' in when) return this.nowMs + when.fromNowH * hourMs;
    const day = new Date(this.nowMs);
    return new Date(day.getFullYear(), day.getMonth(), day.getDate() + when.day, when.hour).getTime();
  }

  async #import(file: RigFile, remark: string, by: SignedIn): Promise<void> {
    const revision = await this.#services.rigs.import(file, remark, by);
    this.#rigs.set(`${revision.code}/${revision.revision}`, revision);
  }

  async #register(code: string, name: string): Promise<void> {
    const { device, key } = await this.#services.devices.register(name, this.#rig(code, 1).rigId);
    this.#benches.set(code, { id: device.id, name, key });
  }

  /** While the lab is made, every bench has the rig that is asked of it. */
  #control(): DeviceControl {
    return {
      ...noDevices,
      stateOf: () => 'connected',
      arm: () => 'sent',
      rigOf: () => this.#mounted,
    };
  }

  #person(name: CastName): SignedIn {
    const person = this.#people.get(name);
    if (!person) throw new Error(`${name} is not in the cast`);
    return person;
  }

  #rig(code: string, revision: number): RigRevision {
    const rig = this.#rigs.get(`${code}/${revision}`);
    if (!rig) throw new Error(`Revision ${revision} of ${code} was not imported`);
    return rig;
  }

  #bench(code: string): { id: DeviceId; name: string; key: string } {
    const bench = this.#benches.get(code);
    if (!bench) throw new Error(`No bench has ${code}`);
    return bench;
  }
}

function idOf<Id>(list: readonly ({ id: Id } & ({ code: string } | { blindCode: string }))[], code: string): Id {
  const found = list.find((each) => ('code' in each ? each.code : each.blindCode) === code);
  if (!found) throw new Error(`${code} is not in the study`);
  return found.id;
}

/** Where a note stands: on a trouble of the run's truth, or at its second. */
function placeOf(plan: DemoNote, truth: readonly Truth[], durationS: number): { startS: number; endS: number | null; cables: number[] } {
  const round = (value: number) => Math.round(value * 1000) / 1000;
  const trouble = plan.at ? truth.filter(({ kind }) => kind === plan.at?.kind)[plan.at.nth ?? 0] : undefined;
  if (plan.at && !trouble) throw new Error(`A note stands at a ${plan.at.kind} that the run does not hold`);
  const startS = trouble?.startS ?? plan.atS ?? 0;
  const endS = plan.span === true ? (trouble?.endS ?? durationS) : typeof plan.span === 'number' ? startS + plan.span : null;
  return { startS: round(startS), endS: endS === null ? null : round(Math.min(endS, durationS)), cables: plan.cables && trouble?.cable ? [trouble.cable] : [] };
}

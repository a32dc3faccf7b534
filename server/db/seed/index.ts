/**
 * The demo lab, made at seed time through the same services that the screens use.
 *
 * Deterministic but for the days, which count from today: movements, troubles and sensor noise come from fixed seeds.
 */
import { readFile } from 'node:fs/promises';
import { fileURLToPath } from 'node:url';
import type { Logger } from 'pino';
import { v7 } from 'uuid';
import { z } from 'zod';
import { deviceId, labRole, type SessionId } from '@shared/api/common';
import type { Study } from '@shared/api/studies';
import type { RigRevision } from '@shared/api/rigs';
import { rigModel } from '@shared/rig';
import { createAnalysis } from '../../analysis';
import type { SignedIn } from '../../auth';
import { writeRecording } from '../../ingest';
import { createBus } from '../../live/bus';
import { createServices, noDevices, type Services } from '../../services';
import { simulateRun, type SimulatedRun } from '../../simulator';
import { StartRefusal } from '../../start-refusal';
import type { OpenDatabase } from '../engine';
import { cast, type CastName } from './cast';
import { fileUnder, findDemoLab, hasPeople, keepDemoLab } from './queries';
import { type SceneNote, type SceneSession, type SceneStudy, type SceneTrial, script } from './script';

const demoLab = z.object({
  signIns: z.array(z.object({ role: labRole, name: z.string(), email: z.string(), password: z.string() })),
  device: z.object({ id: deviceId, name: z.string(), key: z.string(), rigFile: z.string(), revision: z.number() }),
});
export type DemoLab = z.infer<typeof demoLab>;
export type DemoDevice = DemoLab['device'];

const rigFileOf = (code: string) => fileURLToPath(new URL(`../../../samples/rigs/${code}.json`, import.meta.url));
const dayMs = 24 * 3600 * 1000;

export interface SeedOptions {
  log: Logger;
  onProgress?: (what: string) => void;
  /** Today; recordings of earlier days lie before it. */
  now?: Date;
}

/** Makes the demo lab, or finds the one that was made before. @throws StartRefusal DATA_IN_USE when the data are of something else */
export async function seedDemoLab(open: OpenDatabase, { log, onProgress = () => undefined, now = new Date() }: SeedOptions): Promise<DemoLab> {
  const known = demoLab.safeParse(await findDemoLab(open.db));
  if (known.success) return known.data;
  if (await hasPeople(open.db)) {
    throw new StartRefusal('DATA_IN_USE', 'This data directory holds a lab that is not a whole demo lab: a real one, or a demo whose first start was interrupted.', 'Choose another folder with DATA_DIR, or remove .data/demo if it was the interrupted demo.');
  }
  const lab = await new Seed(open, log, onProgress, now).make();
  await keepDemoLab(open.db, lab);
  return lab;
}

class Seed {
  private readonly bus;
  /** What the lab's clock shows while a scene is played. */
  private clock: Date;
  private people!: Record<CastName, SignedIn>;
  private services!: Services;
  private readonly rigs = new Map<string, RigRevision>();
  private readonly devices = new Map<string, string>();

  constructor(private readonly open: OpenDatabase, private readonly log: Logger, private readonly onProgress: (what: string) => void, private readonly today: Date) {
    this.bus = createBus((error) => log.error({ error }, 'a listener failed'));
    this.clock = today;
  }

  async make(): Promise<DemoLab> {
    this.onProgress('Making the demo lab: people, rigs, studies …');
    this.services = await createServices({
      db: this.open.db, bus: this.bus, control: noDevices, log: this.log, publicUrl: () => 'http://127.0.0.1',
      config: { smtp: undefined, mailFrom: 'Tautbook <tautbook@localhost>', authSecret: undefined }, now: () => this.clock,
    });
    const made = await Promise.all(Object.entries(cast).map(async ([name, person]) => [name, await this.services.people.makePerson(person)] as const));
    this.people = Object.fromEntries(made) as Record<CastName, SignedIn>;
    const device = await this.makeRigs();
    const trials = script.flatMap(({ sessions }) => sessions.flatMap((session) => session.trials)).filter(({ run }) => run).length;
    let done = 0;
    for (const study of script) {
      await this.makeStudy(study, () => {
        done += 1;
        this.onProgress(`Recording trial ${done} of ${trials} on the simulated rigs …`);
      });
    }
    this.onProgress('Looking the recordings through for flags …');
    const analysis = await createAnalysis({ db: this.open.db, bus: this.bus, log: this.log });
    await analysis.settled();
    await analysis.close();
    return { signIns: Object.values(cast), device };
  }

  private async makeRigs(): Promise<DemoDevice> {
    const read = async (code: string) => JSON.parse(await readFile(rigFileOf(code), 'utf8')) as { tensionMin: number };
    const heron = await read('heron-8');
    const { administrator, lead } = this.people;
    await this.services.rigs.import({ ...heron, tensionMin: heron.tensionMin * 0.8 }, 'As it came from the workshop.', administrator);
    this.rigs.set('heron-8', await this.services.rigs.import(heron, 'Pretension raised after the first trials went slack.', lead));
    this.rigs.set('wren-8', await this.services.rigs.import(await read('wren-8'), 'As built.', administrator));
    let demo: DemoDevice | null = null;
    for (const [code, name] of [['heron-8', 'Heron bench, simulated'], ['wren-8', 'Wren bench, simulated']] as const) {
      const rig = this.rigs.get(code) as RigRevision;
      const { device, key } = await this.services.devices.register(name, rig.rigId);
      this.devices.set(code, device.id);
      demo ??= { id: device.id, name, key, rigFile: `samples/rigs/${code}.json`, revision: rig.revision };
    }
    return demo as DemoDevice;
  }

  private async makeStudy(scene: SceneStudy, onRecorded: () => void): Promise<void> {
    const { lead } = this.people;
    const { studies } = this.services;
    const study = await studies.create(scene, lead);
    await studies.change({ studyId: study.id, role: 'lead', blind: false }, { state: 'running' }, lead);
    for (const { who, role, blind } of scene.members) await studies.setMember(study.id, this.people[who].id, role, blind);
    for (const participant of scene.participants) await studies.addParticipant(study.id, participant);
    const { participants } = await studies.participants(study.id);
    for (const session of scene.sessions) {
      const participant = participants.find(({ code }) => code === session.participant);
      if (!participant) throw new Error(`The script has no participant ${session.participant}`);
      await this.makeSession(scene, study, session, participant.id, onRecorded);
    }
  }

  private async makeSession(scene: SceneStudy, study: Study, session: SceneSession, participantId: Study['id'] | string, onRecorded: () => void): Promise<void> {
    const [hours = 0, minutes = 0] = session.time.split(':').map(Number);
    const midnight = new Date(this.today);
    midnight.setUTCHours(0, 0, 0, 0);
    const plannedAt = new Date(midnight.getTime() + session.day * dayMs + (hours * 60 + minutes) * 60_000);
    // What happened today happened before now, at whatever hour the demo is started.
    const began = new Date(Math.min(plannedAt.getTime(), this.today.getTime() - 30 * 60_000));
    const { sessions, sessionReader } = this.services;
    const operator = this.people.operator;
    this.clock = new Date(began.getTime() - dayMs);
    const id: SessionId = await sessions.plan(study.id, {
      participantId: participantId as never, rigRevisionId: (this.rigs.get(scene.rig) as RigRevision).id, plannedAt: plannedAt.toISOString(),
      trials: session.trials.map(({ task, condition }) => ({ taskId: found(study.tasks, 'code', task).id, conditionId: found(study.conditions, 'blindCode', condition).id })),
    }, operator);
    const planned = await sessionReader.get(id, { blind: false });
    for (const [i, trial] of session.trials.entries()) {
      const row = planned.trials[i];
      if (!trial.run || !row) continue;
      this.clock = new Date(began.getTime() + (3 + i * 5) * 60_000);
      await this.recordTrial(scene, row.id, trial);
      onRecorded();
    }
    if (session.closed) await sessions.close(id, operator);
  }

  private async recordTrial(scene: SceneStudy, trialId: Parameters<Services['sessions']['judge']>[0], { task, run }: SceneTrial): Promise<void> {
    if (!run) return;
    const rig = this.rigs.get(scene.rig) as RigRevision;
    const deviceOf = this.devices.get(scene.rig) as string;
    const simulated = simulateRun({ rig: rigModel(rig.file), task, seed: run.seed, durationS: run.durationS, troubles: run.troubles, chunkSamples: 1000, wrench: true });
    const startedAt = this.clock;
    const recording = await writeRecording(this.open.db, {
      deviceId: deviceOf, run: `demo-${run.seed}`, rigRevisionId: rig.id, rateHz: simulated.rateHz, channels: [...simulated.channels], startedAt,
      firmware: 'simulated', startUncertaintyUs: 400,
    }, simulated);
    await fileUnder(this.open.db, recording.id, trialId);
    this.clock = new Date(startedAt.getTime() + run.durationS * 1000 + 5_000);
    await this.services.sessions.fileRecording(trialId, { deviceId: deviceOf, recordingId: recording.id }, this.people.operator);
    if (run.outcome) await this.services.sessions.judge(trialId, { outcome: run.outcome, reason: run.reason ?? '' }, this.people.operator);
    for (const note of run.notes ?? []) await this.writeNote(trialId, note, simulated);
  }

  private async writeNote(trialId: Parameters<Services['notes']['add']>[0], note: SceneNote, run: SimulatedRun): Promise<void> {
    this.clock = new Date(this.clock.getTime() + 60_000);
    const { notes } = this.services;
    const trouble = typeof note.at === 'number' ? undefined : found(run.troubles, 'kind', note.at.trouble);
    const startS = typeof note.at === 'number' ? note.at : Math.max(0, (trouble?.atS ?? 0) - 0.2);
    const endS = note.endS ?? (trouble ? trouble.atS + Math.max(trouble.durationS, 0.5) + 0.2 : null);
    const cables = note.cables ?? (trouble && trouble.kind !== 'oscillation' && trouble.kind !== 'gap' ? [trouble.cable] : []);
    const written = await notes.add(trialId, { startS, endS, cables, text: note.text, clientKey: v7() }, this.people[note.by]);
    for (const reply of note.replies ?? []) await notes.reply(written.id, { text: reply.text, clientKey: v7() }, this.people[reply.by]);
    if (note.resolvedBy) await notes.resolve(written.id, true, this.people[note.resolvedBy]);
  }
}

function found<T, K extends keyof T>(list: readonly T[], key: K, value: unknown): T {
  const entry = list.find((each) => each[key] === value);
  if (!entry) throw new Error(`The script names ${String(key)} ${String(value)}, which is not there`);
  return entry;
}

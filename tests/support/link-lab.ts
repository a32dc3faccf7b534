/** A database with one rig and its devices, a device link on a real port, and a book of trials that notes what it is told. */
import { createHash, randomBytes } from 'node:crypto';
import { readFileSync } from 'node:fs';
import { createServer, type Server } from 'node:http';
import type { AddressInfo } from 'node:net';
import { fileURLToPath } from 'node:url';
import pino from 'pino';
import { and, eq } from 'drizzle-orm';
import { deviceId, trialId, type DeviceId, type TrialId } from '@shared/api/common';
import type { LinkOptions } from '@shared/link';
import type { Chunk } from '@shared/recording';
import type { RigFile } from '@shared/rig';
import type { Database, OpenDatabase } from '@server/db/engine';
import { conditions, devices, participants, recordings, rigRevisions, rigs, sessions, studies, tasks, trials } from '@server/db/schema';
import { createDeviceLink, type DeviceLink, readChunks, type TrialBook } from '@server/ingest';
import { type Bus, createBus } from '@server/live/bus';
import { testDatabase } from './database';

const rigFile = (code: string): RigFile => JSON.parse(readFileSync(fileURLToPath(new URL(`../../samples/rigs/${code}.json`, import.meta.url)), 'utf8')) as RigFile;

/** Short waits, so that tests of waiting take no time; sizes as in the field. */
export const quick: Partial<LinkOptions> = { commitEveryMs: 15, retryFirstMs: 20, retryMostMs: 60, busyPingMs: 200, clockBurstEveryMs: 5, clockEveryMs: 50, sweepEveryMs: 200 };

export interface Told { what: keyof TrialBook; trial: string; reason?: string }

export interface LinkLab {
  open: OpenDatabase;
  db: Database;
  bus: Bus;
  told: Told[];
  armed: Map<DeviceId, TrialId>;
  link: DeviceLink;
  url: string;
  /** A new device of heron-8. */
  device(): Promise<{ id: DeviceId; key: string }>;
  /** A new trial of heron-8, armed on the device. */
  armedTrial(device: DeviceId): Promise<TrialId>;
  /** Stops the link and starts another one on the same database, as a restart does. */
  restart(): Promise<void>;
  recording(device: DeviceId, run: string): Promise<typeof recordings.$inferSelect>;
  samples(recordingId: string): Promise<Chunk[]>;
  faultsOf(device: DeviceId): Promise<Record<string, number>>;
  close(): Promise<void>;
}

export async function plantRigs(db: Database): Promise<string> {
  let heron = '';
  for (const code of ['heron-8', 'wren-8']) {
    const [rig] = await db.insert(rigs).values({ code }).returning();
    if (!rig) throw new Error('no rig');
    if (code === 'heron-8') heron = rig.id;
    await db.insert(rigRevisions).values({ rigId: rig.id, revision: 1, title: code, file: rigFile(code), digest: code });
  }
  return heron;
}

export async function plantDevice(db: Database, rigId: string): Promise<{ id: DeviceId; key: string }> {
  const key = `tbk_${randomBytes(32).toString('base64url')}`;
  const [row] = await db.insert(devices).values({ name: 'Bench', rigId, keyHash: createHash('sha256').update(key).digest('hex'), keyHint: '…' }).returning();
  if (!row) throw new Error('no device');
  return { id: deviceId.parse(row.id), key };
}

/** A study with one open session on heron-8. @returns what makes its next trial */
export async function plantSession(db: Database): Promise<() => Promise<TrialId>> {
  const only = async <Row>(rows: Promise<Row[]>): Promise<Row> => {
    const [row] = await rows;
    if (!row) throw new Error('not written');
    return row;
  };
  const study = await only(db.insert(studies).values({ code: 'BENCH', title: 'Bench', state: 'running' }).returning());
  const of = { studyId: study.id, place: 1 };
  const condition = await only(db.insert(conditions).values({ ...of, blindCode: 'A', label: 'as it is' }).returning());
  const task = await only(db.insert(tasks).values({ ...of, code: 'place', title: 'Pick and place' }).returning());
  const participant = await only(db.insert(participants).values({ studyId: study.id, code: 'K-001' }).returning());
  const revision = await only(db.select().from(rigRevisions).where(eq(rigRevisions.digest, 'heron-8')));
  const session = await only(db.insert(sessions).values({ studyId: study.id, participantId: participant.id, rigRevisionId: revision.id, visit: 1, state: 'open', plannedAt: new Date() }).returning());
  let number = 0;
  return async () => {
    number += 1;
    const trial = await only(db.insert(trials).values({ sessionId: session.id, number, taskId: task.id, conditionId: condition.id, state: 'armed' }).returning());
    return trialId.parse(trial.id);
  };
}

/** @param around wraps the database that the link gets, to make it fail */
export async function openLinkLab(options: Partial<LinkOptions> = {}, around: (db: Database) => Database = (db) => db): Promise<LinkLab> {
  const open = await testDatabase();
  const { db } = open;
  const rigId = await plantRigs(db);
  const plantTrial = await plantSession(db);
  const known = new Set<string>();
  const told: Told[] = [];
  const armed = new Map<DeviceId, TrialId>();
  const bus = createBus((error) => { throw error; });
  const book: TrialBook = {
    mayBegin: async (device, trial) => (armed.get(device) === trial ? 'yes' : known.has(trial) ? 'not-armed' : 'unknown'),
    armedOn: async (device) => armed.get(device) ?? null,
    began: async (trial) => { told.push({ what: 'began', trial }); },
    away: async (trial) => { told.push({ what: 'away', trial }); },
    back: async (trial) => { told.push({ what: 'back', trial }); },
    stopped: async (trial, _recording, reason) => { told.push({ what: 'stopped', trial, reason }); },
  };
  const start = () => createDeviceLink({ db: around(db), bus, book, log: pino({ level: 'silent' }), options: { ...quick, ...options } });

  const lab: LinkLab = {
    open, db, bus, told, armed,
    link: await start(),
    url: '',
    device: () => plantDevice(db, rigId),
    async armedTrial(device) {
      const trial = await plantTrial();
      known.add(trial);
      armed.set(device, trial);
      return trial;
    },
    async restart() {
      await lab.link.close();
      lab.link = await start();
    },
    async recording(device, run) {
      const [row] = await db.select().from(recordings).where(and(eq(recordings.deviceId, device), eq(recordings.run, run)));
      if (!row) throw new Error(`There is no recording of run ${run}`);
      return row;
    },
    async samples(recordingId) {
      const chunks: Chunk[] = [];
      for await (const chunk of readChunks(db, recordingId)) chunks.push(chunk);
      return chunks;
    },
    async faultsOf(device) {
      const [row] = await db.select({ faults: devices.faults }).from(devices).where(eq(devices.id, device));
      return row?.faults ?? {};
    },
    async close() {
      await lab.link.close();
      await new Promise((resolve) => server.close(resolve));
      await open.close();
    },
  };
  const server: Server = createServer();
  server.on('upgrade', (req, socket, head) => lab.link.handleUpgrade(req, socket, head as Buffer));
  await new Promise<void>((resolve) => server.listen(0, '127.0.0.1', resolve));
  lab.url = `http://127.0.0.1:${(server.address() as AddressInfo).port}`;
  return lab;
}

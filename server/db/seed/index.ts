/**
 * The demo lab: a fictional lab with recorded trials, made at the first start of the demo from fixed seeds.
 *
 * Everything is made in one transaction: a first start that is killed halfway leaves nothing, and the next one makes it.
 */
import type { Logger } from 'pino';
import { createAnalysis } from '../../analysis';
import type { DemoSignIn } from '../../features/people';
import { createBus } from '../../live/bus';
import { StartRefusal } from '../../start-refusal';
import type { OpenDatabase } from '../engine';
import { cast, demoPassword } from './cast';
import { makeDemoLab, rigPath } from './make-lab';
import { anybodyThere, dateFurniture, findDemoTrace, writeDemoTrace } from './queries';

export interface DemoDevice {
  name: string;
  key: string;
  rigCode: string;
  revision: number;
  /** Path of its rig file. */
  rigFile: string;
}

export interface DemoLab {
  signIns: DemoSignIn[];
  device: DemoDevice;
  /** False when the lab was there already. */
  fresh: boolean;
}

export interface SeedOptions {
  log: Logger;
  onProgress?: (what: string) => void;
  nowMs?: number;
}

/** Revision of heron-8 that the demo device has. */
const demoRevision = 2;

/** @throws StartRefusal CONFIG when the data belong to a real lab: the demo never mixes with one */
export async function seedDemoLab(open: OpenDatabase, { log, onProgress = () => undefined, nowMs = Date.now() }: SeedOptions): Promise<DemoLab> {
  let trace = await findDemoTrace(open.db);
  const fresh = trace === null;
  if (trace === null) {
    if (await anybodyThere(open.db)) {
      throw new StartRefusal('CONFIG', 'These data belong to a real lab; the demo lab is not put into it.', 'Set DATA_DIR (or DATABASE_URL) to an empty place for the demo.');
    }
    onProgress('Making the demo lab, once. This takes a little while…');
    trace = await open.db.transaction(async (tx) => {
      const made = await makeDemoLab(tx, nowMs, log, onProgress);
      await dateFurniture(tx, nowMs);
      await writeDemoTrace(tx, made);
      return made;
    });
    onProgress('Looking the recordings through…');
    await lookThrough(open, log);
  }
  return {
    signIns: Object.values(cast).map(({ role, name, email }) => ({ role, name, email, password: demoPassword })),
    device: { name: trace.deviceName, key: trace.deviceKey, rigCode: 'heron-8', revision: demoRevision, rigFile: rigPath('heron-8') },
    fresh,
  };
}

/** What fails here is tried again by the server's own analysis. */
async function lookThrough(open: OpenDatabase, log: Logger): Promise<void> {
  const analysis = await createAnalysis({ db: open.db, bus: createBus(() => undefined), log });
  await analysis.settled();
  await analysis.close();
}

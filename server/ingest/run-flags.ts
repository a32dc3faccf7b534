/** Flags of a running recording, found as samples come, for the rooms. What is kept for good is found again when it has closed. */
import type { Logger } from 'pino';
import { type Chunk, parseChannels } from '@shared/recording';
import { createFlagger, defaultRules, type Flag, type Flagger, parseRules } from '@shared/flags';
import { rigModel } from '@shared/rig';
import type { Database } from '../db/engine';
import type { Bus, LiveFlag } from '../live/bus';
import { faultText } from './fault-text';
import { rigOfRevision, type RunRow, rulesOfTrial } from './queries';
import type { Run } from './run';

const asLive = (flag: Flag, open: boolean): LiveFlag => ({ ...flag, open });

/** The detectors of the trial's study; null for a run without a trial, which nobody watches. */
export async function flaggerOf(db: Database, { trialId, rigRevisionId, channels, rateHz }: RunRow): Promise<Flagger | null> {
  if (trialId === null) return null;
  const rig = rigModel(await rigOfRevision(db, rigRevisionId));
  const map = parseChannels(channels, rig.cableCount);
  const stored = await rulesOfTrial(db, trialId);
  const rules = Object.keys(stored).length === 0 ? { ok: true as const, rules: defaultRules(rig) } : parseRules(stored, rig);
  return map.ok && rules.ok ? createFlagger(rig, map.map, rateHz, rules.rules) : null;
}

/** Looks at the samples. @returns how many flags ended in them; a detector that fails costs the run its live flags, nothing else */
export function foldFlags(run: Run, chunk: Chunk, log: Logger): number {
  if (run.flagger === null) return 0;
  try {
    const ended = run.flagger.step(chunk);
    for (const flag of ended) run.ended.push(asLive(flag, false));
    return ended.length;
  } catch (error) {
    run.flagger = null;
    log.error({ message: faultText(error), recordingId: run.id }, 'live flags failed');
    return 0;
  }
}

/** @param over the recording is closed: what is open ends with it */
export function tellFlags(run: Run, bus: Bus, over: boolean): void {
  if (run.trialId === null || run.flagger === null) return;
  const going = over ? run.flagger.finish() : run.flagger.open();
  if (going.length === 0 && run.ended.length === 0 && run.openTold === 0) return;
  run.openTold = over ? 0 : going.length;
  bus.tell('liveFlags', { trialId: run.trialId, flags: [...run.ended, ...going.map((flag) => asLive(flag, !over))] });
}

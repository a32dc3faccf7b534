/**
 * Looks closed recordings through for flags, one after another, in a worker thread.
 *
 * What was closed while nobody looked is picked up at the start. A failure is logged and tried again with a growing wait;
 * the recording stays in the list until its flags are written.
 */
import type { Logger } from 'pino';
import { recordingId, trialId } from '@shared/api/common';
import type { Database } from '../db/engine';
import { readEncodedChunks } from '../ingest';
import type { Bus } from '../live/bus';
import { FlagFinder } from './flag-finder';
import { newestRules, recordingToSearch, storeFlags, waitingRecordings } from './queries';

export interface Analysis {
  /** Resolves when nothing waits any more. */
  settled(): Promise<void>;
  close(): Promise<void>;
}

const RETRY_FIRST_MS = 1_000;
const RETRY_MOST_MS = 60_000;

export async function createAnalysis({ db, bus, log }: { db: Database; bus: Bus; log: Logger }): Promise<Analysis> {
  const finder = new FlagFinder();
  const waiting = new Set<string>();
  let running: Promise<void> | null = null;
  let stopped = false;
  let retry: NodeJS.Timeout | undefined;
  let retryMs = RETRY_FIRST_MS;

  async function search(id: string): Promise<void> {
    const recording = await recordingToSearch(db, id);
    if (recording === null) return;
    const rules = recording.studyId === null ? null : await newestRules(db, recording.studyId);
    const flags = await finder.find(
      { rig: recording.rig, channels: recording.channels, rateHz: recording.rateHz, rules: rules === null || Object.keys(rules.rules).length === 0 ? null : rules.rules },
      readEncodedChunks(db, id),
    );
    await storeFlags(db, id, rules?.id ?? null, flags, new Date());
    if (recording.trialId !== null) bus.tell('flagsFound', { recordingId: recordingId.parse(id), trialId: trialId.parse(recording.trialId) });
  }

  async function run(): Promise<void> {
    for (const id of waiting) {
      if (stopped) return;
      try {
        await search(id);
        waiting.delete(id);
        retryMs = RETRY_FIRST_MS;
      } catch (error) {
        if (stopped) return;
        log.error({ recordingId: id, message: error instanceof Error ? error.message.slice(0, 300) : '' }, 'looking through a recording failed; trying again');
        retry = setTimeout(wake, retryMs);
        retry.unref();
        retryMs = Math.min(RETRY_MOST_MS, retryMs * 2);
        return;
      }
    }
  }

  function wake(): void {
    if (running !== null || stopped) return;
    running = run().finally(() => { running = null; });
  }

  const unlisten = bus.on('recordingClosed', ({ recordingId: id }) => {
    waiting.add(id);
    wake();
  });
  for (const { id } of await waitingRecordings(db)) waiting.add(id);
  wake();

  return {
    async settled() {
      while (running !== null) await running;
    },
    async close() {
      stopped = true;
      unlisten();
      clearTimeout(retry);
      await finder.close();
      await running;
    },
  };
}

/** Worker thread that looks through one recording after another: chunks in, flags out. It touches no database. */
import { parentPort } from 'node:worker_threads';
import { createFlagger, defaultRules, type Flag, type Flagger, parseRules } from '@shared/flags';
import { parseChannels } from '@shared/recording';
import { type RigFile, rigModel } from '@shared/rig';
import { unpackChunk } from '../ingest';

export type WorkerQuestion =
  | { readonly ask: 'open'; readonly rig: RigFile; readonly channels: readonly string[]; readonly rateHz: number; readonly rules: unknown }
  | { readonly ask: 'chunks'; readonly chunks: readonly Uint8Array[] }
  | { readonly ask: 'finish' };

export type WorkerAnswer = { readonly flags: readonly Flag[] } | { readonly fault: string };

let flagger: Flagger | null = null;

function answer(question: WorkerQuestion): readonly Flag[] {
  if (question.ask === 'open') {
    const rig = rigModel(question.rig);
    const channels = parseChannels(question.channels, rig.cableCount);
    if (!channels.ok) throw new Error(channels.error.message);
    const rules = question.rules === null ? { ok: true as const, rules: defaultRules(rig) } : parseRules(question.rules, rig);
    if (!rules.ok) throw new Error(rules.faults.map(({ message }) => message).join(' '));
    flagger = createFlagger(rig, channels.map, question.rateHz, rules.rules);
    return [];
  }
  if (flagger === null) throw new Error('No recording is open');
  if (question.ask === 'finish') return flagger.finish();
  const found: Flag[] = [];
  for (const bytes of question.chunks) found.push(...flagger.step(unpackChunk(bytes)));
  return found;
}

parentPort?.on('message', (question: WorkerQuestion) => {
  try {
    parentPort?.postMessage({ flags: answer(question) } satisfies WorkerAnswer);
  } catch (error) {
    parentPort?.postMessage({ fault: error instanceof Error ? error.message : String(error) } satisfies WorkerAnswer);
  }
});

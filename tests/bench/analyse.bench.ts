/**
 * A whole recording (kinematic residual, tension feasibility, wrench, flags, measures) against real time, in CPU seconds of this
 * process; and memory over two lengths when streamed.
 */
import { readFileSync } from 'node:fs';
import { gunzipSync } from 'node:zlib';
import { createAnalyser } from '@server/cli/analyse/analyser';
import { createCsvReader, parseChannels, type Chunk } from '@shared/recording';
import { defaultRules } from '@shared/flags';
import { parseRig } from '@shared/rig';
import type { Row } from './row';

export const name = 'analyse';

const file = (path: string) => readFileSync(new URL(`../../${path}`, import.meta.url));
const rig = parseRig(JSON.parse(file('samples/rigs/heron-8.json').toString()));

function cpuMs(): number {
  const { user, system } = process.cpuUsage();
  return (user + system) / 1000;
}

export async function run(): Promise<Row[]> {
  const text = gunzipSync(file('tests/conformance/recordings/session-a.csv.gz'));
  const reader = createCsvReader({ cableCount: rig.cableCount });
  const chunks = [...reader.push(text), ...reader.finish()];
  const parsed = parseChannels(reader.channels, rig.cableCount);
  if (!parsed.ok) throw new Error(parsed.error.message);
  const { map } = parsed;
  const recordedMs = ((chunks.at(-1)?.timesUs[(chunks.at(-1)?.count ?? 1) - 1] ?? 0) - (chunks[0]?.timesUs[0] ?? 0)) / 1000;

  const analyse = (of: Iterable<Chunk>): void => {
    const analyser = createAnalyser(rig, map, defaultRules(rig));
    for (const chunk of of) analyser.push(chunk);
    analyser.finish();
  };
  const leastOf = (times: number, work: () => void): number => {
    let least = Infinity;
    for (let i = 0; i < times; i += 1) {
      const from = cpuMs();
      work();
      least = Math.min(least, cpuMs() - from);
    }
    return least;
  };
  const analysing = leastOf(8, () => analyse(chunks));
  const parsing = leastOf(4, () => {
    const again = createCsvReader({ cableCount: rig.cableCount });
    again.push(text);
    again.finish();
  });

  // The same minute over and over, its clock going on: what is held must not grow with the length.
  function* repeated(times: number): Generator<Chunk> {
    for (let n = 0; n < times; n += 1) {
      const offset = n * (recordedMs + 1) * 1000;
      for (const chunk of chunks) yield { ...chunk, first: chunk.first + n * 60_000, timesUs: chunk.timesUs.map((us) => us + offset) };
    }
  }
  const heldAfter = (times: number): number => {
    const analyser = createAnalyser(rig, map, defaultRules(rig));
    for (const chunk of repeated(times)) analyser.push(chunk);
    globalThis.gc?.();
    const held = process.memoryUsage().heapUsed + process.memoryUsage().arrayBuffers;
    analyser.finish();
    return held / 1e6;
  };
  heldAfter(1);
  const [short, long] = [heldAfter(2), heldAfter(10)];
  return [
    { name: 'a recording analysed, times real time', value: recordedMs / analysing, unit: 'x', baseline: `reading its CSV ${(recordedMs / parsing).toFixed(0)} x`, ratio: parsing / analysing, target: '200 x or more', met: recordedMs / analysing >= 200 },
    { name: 'held after ten minutes', value: long, unit: 'MB', baseline: `after two minutes ${short.toFixed(1)} MB`, ratio: short / long, target: 'flat: at most 2 MB more', met: long - short <= 2 },
  ];
}

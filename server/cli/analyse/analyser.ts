/** What `analyse` computes over a recording, chunk by chunk in constant memory (but for the lists it prints). */
import { byStart, createFlagger, handStatics, type Flag, type HandStaticsColumns, type Rules } from '@shared/flags';
import { createMeasures, type RecordingMeasures } from '@shared/motion';
import { nominalRate, recordingSummer, shortestFloat32, type ChannelMap, type Chunk, type Gap } from '@shared/recording';
import type { RigModel } from '@shared/rig';

export type Analysis = {
  recording: {
    samples: number;
    /** First to last sample, s. */
    duration: number;
    /** Null for a single sample. */
    rateHz: number | null;
    gaps: { start: number; end: number; missingSamples: number }[];
  };
  flags: { kind: Flag['kind']; cable?: number; start: number; end: number; peak?: number }[];
  measures: RecordingMeasures;
};

export type Analyser = { push(chunk: Chunk): void; finish(): Analysis };

/** The rate is taken from the first chunk, so that should hold a second or so. */
export function createAnalyser(rig: RigModel, map: ChannelMap, rules: Rules): Analyser {
  let begun: Work | null = null;
  return {
    push(chunk) {
      begun ??= begin(rig, map, rules, nominalRate(chunk.timesUs, chunk.count));
      begun.push(chunk);
    },
    finish: () => (begun ?? begin(rig, map, rules, null)).finish(),
  };
}

type Work = { push(chunk: Chunk): void; finish(): Analysis };

function begin(rig: RigModel, map: ChannelMap, rules: Rules, rateHz: number | null): Work {
  // With a single sample no rule depends on the rate; the sample stands for the clock's least step, so that no time is made up.
  const rate = rateHz ?? 1;
  const flagger = createFlagger(rig, map, rate, rules);
  const summer = recordingSummer(map.names.length, rate);
  const staticsOf = handStatics(rig, map);
  const { min, max } = rig.graspRange;
  const measures = createMeasures({
    rateHz: rateHz ?? 1e6,
    cableCount: rig.cableCount,
    tensionMin: rig.tensionMin,
    tensionMax: rig.tensionMax,
    slackBelow: rig.slackBelow,
    grasp: max > min ? { min, max } : undefined,
  });
  const flags: Flag[] = [];
  return {
    push(chunk) {
      flags.push(...flagger.step(chunk));
      summer.push(chunk);
      measures.push(measureChunk(chunk, map, staticsOf(chunk)));
    },
    finish() {
      flags.push(...flagger.finish());
      const { samples, startS, endS, gaps } = summer.result();
      return {
        recording: { samples, duration: Number((endS - startS).toFixed(6)), rateHz, gaps: gaps.map(printedGap) },
        flags: flags.sort(byStart).map(printedFlag),
        measures: measures.finish(),
      };
    },
  };
}

function measureChunk(chunk: Chunk, map: ChannelMap, { wrench, feasible }: HandStaticsColumns) {
  const column = (index: number | undefined) => chunk.columns[index as number] as Float32Array;
  const [x, y, z, qx, qy, qz, qw] = map.pose.map(column) as [Float32Array, Float32Array, Float32Array, Float32Array, Float32Array, Float32Array, Float32Array];
  return {
    count: chunk.count,
    t: chunk.timesUs.map((timeUs) => timeUs / 1e6),
    x,
    y,
    z,
    q: [qx, qy, qz, qw] as const,
    grasp: column(map.grasp),
    tensions: map.tensions.map(column),
    wrench,
    feasible,
  };
}

const printedGap = ({ startS, endS, missing }: Gap) => ({ start: seconds(startS), end: seconds(endS), missingSamples: missing });

function printedFlag({ kind, cable, startS, endS, peak }: Flag): Analysis['flags'][number] {
  return {
    kind,
    ...(cable === undefined ? {} : { cable }),
    start: seconds(startS),
    end: seconds(endS),
    // Peaks are float32 or come from such: print what the file said, 0.1559 rather than 0.1559000015258789.
    ...(peak === undefined ? {} : { peak: Number(shortestFloat32(Math.fround(peak))) }),
  };
}

/** Without the last digits that dividing µs leaves behind, and with every µs of a clock that counts from 1970. */
const seconds = (value: number): number => Number(value.toFixed(9));

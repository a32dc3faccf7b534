/** However a recording is cut into chunks, the same flags and the same measures come out: live, offline, in one piece, in any. */
import { readFileSync } from 'node:fs';
import fc from 'fast-check';
import { describe, expect, test } from 'vitest';
import { byStart, createFlagger, defaultRules, type Flag } from '@shared/flags';
import { parseChannels, type Chunk } from '@shared/recording';
import { parseRig } from '@shared/rig';
import { createAnalyser } from '@server/cli/analyse/analyser';
import { simulateRun } from '@server/simulator';

const rig = parseRig(JSON.parse(readFileSync(new URL('../../../samples/rigs/heron-8.json', import.meta.url), 'utf8')));
const run = simulateRun({
  rig, task: 'pick-and-place', seed: 33, durationS: 14, rateHz: 1000,
  troubles: [
    { kind: 'slack', atS: 2, durationS: 0.3, cable: 4 }, { kind: 'saturation', atS: 4, durationS: 0.5 }, { kind: 'gap', atS: 6, durationS: 0.12 },
    { kind: 'oscillation', atS: 8, durationS: 0.6 }, { kind: 'pretension', atS: 10.5, durationS: 0.6 }, { kind: 'slip', atS: 12, cable: 2 },
  ],
});
const whole = joined([...run]);
const parsed = parseChannels(run.channels, rig.cableCount);
if (!parsed.ok) throw new Error(parsed.error.message);
const { map } = parsed;

function joined(chunks: readonly Chunk[]): Chunk {
  const count = chunks.reduce((sum, chunk) => sum + chunk.count, 0);
  const all: Chunk = { first: 0, count, timesUs: new Float64Array(count), columns: (chunks[0]?.columns ?? []).map(() => new Float32Array(count)) };
  let at = 0;
  for (const chunk of chunks) {
    all.timesUs.set(chunk.timesUs.subarray(0, chunk.count), at);
    all.columns.forEach((column, c) => column.set((chunk.columns[c] as Float32Array).subarray(0, chunk.count), at));
    at += chunk.count;
  }
  return all;
}

/** The samples between the cuts, each piece a chunk of its own. */
function pieces(cuts: readonly number[]): Chunk[] {
  const edges = [0, ...[...new Set(cuts)].filter((cut) => cut > 0 && cut < whole.count).sort((a, b) => a - b), whole.count];
  return edges.slice(1).map((to, i) => {
    const from = edges[i] as number;
    return { first: from, count: to - from, timesUs: whole.timesUs.slice(from, to), columns: whole.columns.map((column) => column.slice(from, to)) };
  });
}

const every = (size: number) => Array.from({ length: Math.ceil(whole.count / size) }, (_, i) => i * size);

function flagsOf(chunks: readonly Chunk[]): Flag[] {
  const flagger = createFlagger(rig, map, 1000, defaultRules(rig));
  const flags = chunks.flatMap((chunk) => flagger.step(chunk));
  return [...flags, ...flagger.finish()].sort(byStart);
}

const inOnePiece = flagsOf([whole]);

describe('cut into chunks', () => {
  test('the run has a flag of every kind that is looked for', () => {
    expect(new Set(inOnePiece.map(({ kind }) => kind))).toEqual(new Set(['slack', 'saturation', 'gap', 'slip', 'oscillation']));
  });

  test.each([7, 25, 1000])('of %i samples, the flags are the same', (size) => {
    expect(flagsOf(pieces(every(size)))).toEqual(inOnePiece);
  });

  test('of one sample, the flags round the first slack are the same', () => {
    const end = 3000;
    expect(flagsOf(pieces([...Array.from({ length: end }, (_, i) => i), end]))).toEqual(inOnePiece);
  });

  test('anywhere, the flags are the same', () => {
    fc.assert(fc.property(fc.array(fc.integer({ min: 1, max: whole.count - 1 }), { maxLength: 40 }), (cuts) => {
      expect(flagsOf(pieces(cuts))).toEqual(inOnePiece);
    }), { numRuns: 25 });
  });

  test('anywhere, what is said live at a moment is what is found in the end', () => {
    fc.assert(fc.property(fc.integer({ min: 1, max: whole.count - 1 }), (now) => {
      const flagger = createFlagger(rig, map, 1000, defaultRules(rig));
      const ended = flagger.step(pieces([now])[0] as Chunk);
      const open = flagger.open();
      for (const flag of ended) expect(inOnePiece).toContainEqual(flag);
      for (const flag of open) expect(inOnePiece.some(({ kind, cable, startS }) => kind === flag.kind && cable === flag.cable && Math.abs(startS - flag.startS) < 0.2)).toBe(true);
    }), { numRuns: 40 });
  });

  test('anywhere, the measures are the same to rounding', () => {
    // The rate is taken from the first chunk, as the file reader hands out: a second.
    const measuresOf = (cuts: readonly number[]) => {
      const analyser = createAnalyser(rig, map, defaultRules(rig));
      for (const chunk of pieces([1000, ...cuts.filter((cut) => cut > 1000)])) analyser.push(chunk);
      return analyser.finish().measures;
    };
    const expected = measuresOf([]);
    fc.assert(fc.property(fc.array(fc.integer({ min: 1001, max: whole.count - 1 }), { maxLength: 30 }), (cuts) => {
      const found = measuresOf(cuts);
      for (const [name, value] of Object.entries(expected)) {
        if (typeof value === 'number') expect({ name, same: Math.abs((found as unknown as Record<string, number>)[name]! - value) <= 1e-9 * Math.max(1, Math.abs(value)) }).toEqual({ name, same: true });
      }
    }), { numRuns: 12 });
  });
});

/**
 * The `analyse` command as somebody outside would run it: two recordings with known truth, made by an independent
 * simulator of the same rigs (their truth files list every incident, every decoy and the tolerances), variations of them,
 * and input that is wrong.
 */
import { execFile } from 'node:child_process';
import { mkdtempSync, readFileSync, rmSync, writeFileSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { fileURLToPath } from 'node:url';
import { gunzipSync, gzipSync } from 'node:zlib';
import { afterAll, beforeAll, describe, expect, test } from 'vitest';
import { channelNames } from '@shared/recording';

const project = fileURLToPath(new URL('../..', import.meta.url));
const recordingOf = (name: string) => join(project, 'tests/conformance/recordings', name);
const rigOf = (code: string) => join(project, 'samples/rigs', `${code}.json`);

interface Found { kind: string; cable?: number; start: number; end: number; peak?: number }
interface Analysis { recording: { samples: number; duration: number; rateHz: number | null; gaps: { start: number; end: number }[] }; flags: Found[]; measures: Record<string, unknown> & { notMeasured: unknown[] } }
interface Run { status: number; stdout: string; stderr: string }
interface Truth { rig: string; rows: number; sampleRateHz: number; incidents: { kind: string; cable: number | null; start: number; end: number; extreme?: number }[]; decoys: { kind: string; cable: number | null; start: number; end: number }[]; startEndTolerance: Record<string, number> }

/** What `npm run -s analyse -- ...` runs, without npm's own half second; `throughNpm` shows that the two are the same. */
const analyse = (...args: string[]) => started(process.execPath, ['--import', 'tsx', 'server/cli/analyse.ts', ...args]);
const throughNpm = (...args: string[]) => started('npm', ['run', '-s', 'analyse', '--', ...args]);

function started(program: string, args: readonly string[]): Promise<Run> {
  return new Promise((resolve, reject) => {
    execFile(program, args, { cwd: project, maxBuffer: 1 << 26 }, (error, stdout, stderr) => {
      if (error !== null && typeof error.code !== 'number') reject(error);
      else resolve({ status: error === null ? 0 : (error.code as number), stdout, stderr });
    });
  });
}

async function analysed(...args: string[]): Promise<Analysis> {
  const { status, stdout, stderr } = await analyse(...args);
  expect({ status, stderr }).toEqual({ status: 0, stderr: '' });
  expect(stdout).not.toMatch(/NaN|Infinity/);
  return JSON.parse(stdout) as Analysis;
}

/** Measures without a value of which nothing says why, at any depth. */
function unsaid(measures: Analysis['measures']): string[] {
  const said = new Set((measures.notMeasured as { measure: string; reason: string }[]).filter(({ reason }) => reason.length > 10).map(({ measure }) => measure));
  const without = (value: unknown, path: string): string[] => {
    if (typeof value === 'number' && Number.isFinite(value)) return [];
    if (Array.isArray(value)) return value.flatMap((inner: { cable: number }) => without(inner, `${path}.${inner.cable}`));
    if (typeof value === 'object' && value !== null) return Object.entries(value).flatMap(([key, inner]) => without(inner, `${path}.${key}`));
    return [...said].some((measure) => path === measure || path.startsWith(`${measure}.`)) ? [] : [path];
  };
  return Object.entries(measures).filter(([key]) => key !== 'notMeasured').flatMap(([key, value]) => without(value, key));
}

let folder: string;
beforeAll(() => { folder = mkdtempSync(join(tmpdir(), 'tautbook-analyse-')); });
afterAll(() => rmSync(folder, { recursive: true, force: true }));
const kept = (name: string, content: string | Uint8Array): string => {
  const path = join(folder, name);
  writeFileSync(path, content);
  return path;
};

const names = channelNames(8);
const header = ['t_s', ...names].join(',');
const at = (name: string) => 1 + names.indexOf(name);
const table = (name: string) => gunzipSync(readFileSync(recordingOf(name))).toString().trimEnd().split('\n').slice(1).map((line) => line.split(','));
const text = (rows: readonly (readonly string[])[]) => `${[header, ...rows.map((row) => row.join(','))].join('\n')}\n`;

describe.each(['session-a', 'session-b'])('the reference recording %s', (name) => {
  const truth = JSON.parse(readFileSync(recordingOf(`${name}.truth.json`), 'utf8')) as Truth;
  let found: Analysis;
  beforeAll(async () => { found = await analysed('--rig', rigOf(truth.rig), recordingOf(`${name}.csv.gz`)); });

  test('is described as it is', () => {
    expect(found.recording).toMatchObject({ samples: truth.rows, rateHz: truth.sampleRateHz });
    expect(found.recording.gaps).toHaveLength(truth.incidents.filter(({ kind }) => kind === 'gap').length);
  });

  test.each(['slack', 'saturation', 'gap', 'slip', 'oscillation'])('every %s is found, none is invented, times are within the truth’s tolerance', (kind) => {
    const flags = found.flags.filter((flag) => flag.kind === kind);
    const wanted = truth.incidents.filter((incident) => incident.kind === kind);
    expect(flags.map(({ cable }) => cable ?? null)).toEqual(wanted.map(({ cable }) => cable));
    const tolerance = (truth.startEndTolerance[kind] ?? 0) + 1e-9;
    wanted.forEach((incident, i) => {
      expect(Math.abs((flags[i]?.start ?? NaN) - incident.start)).toBeLessThanOrEqual(tolerance);
      expect(Math.abs((flags[i]?.end ?? NaN) - incident.end)).toBeLessThanOrEqual(tolerance);
      if (incident.extreme !== undefined) expect(flags[i]?.peak).toBeCloseTo(incident.extreme, 3);
    });
  });

  test('no flag stands on a decoy', () => {
    const onDecoy = truth.decoys.filter((decoy) => found.flags.some((flag) => flag.kind !== 'slip' && flag.kind !== 'gap' && (decoy.cable === null || flag.cable === decoy.cable) && flag.start < decoy.end && flag.end > decoy.start));
    expect(onDecoy).toEqual([]);
  });

  test('its measures are numbers with nothing left unsaid', () => {
    expect(found.measures.notMeasured).toEqual([]);
    expect(unsaid(found.measures)).toEqual([]);
  });

  test('the answer has the shape of the contract (CONTRACTS.md section 4), flags in order of their begin', () => {
    expect(Object.keys(found)).toEqual(['recording', 'flags', 'measures']);
    expect(Object.keys(found.recording)).toEqual(['samples', 'duration', 'rateHz', 'gaps']);
    for (const flag of found.flags) {
      expect(['kind', 'cable', 'start', 'end', 'peak', 'cause']).toEqual(expect.arrayContaining(Object.keys(flag)));
      expect(flag.end).toBeGreaterThan(flag.start);
      expect('cable' in flag).toBe(['slack', 'saturation', 'slip'].includes(flag.kind));
    }
    expect(found.flags.map(({ start }) => start)).toEqual(found.flags.map(({ start }) => start).sort((a, b) => a - b));
  });
});

describe('the same recording in another dress', () => {
  test('plain instead of gzipped gives the same', async () => {
    const plain = kept('a.csv', gunzipSync(readFileSync(recordingOf('session-a.csv.gz'))));
    const [one, two] = await Promise.all([analyse('--rig', rigOf('heron-8'), plain), throughNpm('--rig', rigOf('heron-8'), recordingOf('session-a.csv.gz'))]);
    expect(one).toEqual(two);
    expect(one).toMatchObject({ status: 0, stderr: '' });
  });

  test.each([200, 500, 2000])('at %i Hz the slack of 2.6 s and the saturation of 9.6 s are found within two periods', async (rateHz) => {
    const all = table('session-a.csv.gz').filter(([t]) => Number(t) < 12);
    // Thinned, or played twice as fast: times and not rows count.
    const rows = rateHz > 1000 ? all.map(([t, ...rest]) => [(Number(t) / 2).toFixed(4), ...rest]) : all.filter(([t]) => Math.round(Number(t) * 1000) % (1000 / rateHz) === 0);
    const { recording, flags } = await analysed('--rig', rigOf('heron-8'), kept(`rate-${rateHz}.csv`, text(rows)));
    expect(recording.rateHz).toBe(rateHz);
    const scale = rateHz > 1000 ? 2 : 1;
    const slack = flags.find(({ kind, cable }) => kind === 'slack' && cable === 4);
    const saturation = flags.find(({ kind, cable }) => kind === 'saturation' && cable === 1);
    expect(Math.abs((slack?.start ?? NaN) * scale - 2.595)).toBeLessThanOrEqual(2 * scale / rateHz + 1e-9);
    expect(Math.abs((saturation?.start ?? NaN) * scale - 9.639)).toBeLessThanOrEqual(2 * scale / rateHz + 1e-9);
    expect(flags.filter(({ kind }) => kind === 'gap').map(({ start }) => (start * scale).toFixed(1))).toEqual(['4.8', '7.3']);
  });

  test('a clock that jitters by a tenth of a period makes no gap', async () => {
    const rows = table('session-a.csv.gz').filter(([t]) => Number(t) < 4).map(([t, ...rest], i) => [(Number(t) + (i % 3) * 0.00005).toFixed(6), ...rest]);
    const { recording, flags } = await analysed('--rig', rigOf('heron-8'), kept('jitter.csv', text(rows)));
    expect(recording.gaps).toEqual([]);
    expect(flags.map(({ kind, cable }) => [kind, cable])).toEqual([['slack', 4]]);
  });

  test('a flag that begins with the first sample and one that ends with the last are kept', async () => {
    const rows = table('session-a.csv.gz').filter(([t]) => Number(t) >= 2.7 && Number(t) <= 2.8);
    const { flags } = await analysed('--rig', rigOf('heron-8'), kept('inside.csv', text(rows)));
    expect(flags).toMatchObject([{ kind: 'slack', cable: 4, start: 2.7, end: 2.8 }]);
  });

  test('missing values are no flag and are said where they leave a measure without a value', async () => {
    const rows = table('session-a.csv.gz').filter(([t]) => Number(t) < 4).map((row) => row.map((field, i) => (i === at('t4_N') ? '' : i <= at('z_m') && i > 0 ? 'nan' : field)));
    const { flags, measures } = await analysed('--rig', rigOf('heron-8'), kept('missing.csv', text(rows)));
    expect(flags.filter(({ kind }) => kind === 'slack')).toEqual([]);
    expect(measures.notMeasured).toContainEqual({ measure: 'cables.4', reason: 'The tension of cable 4 was not measured.' });
    // Not measured is not "none": no zero seconds of slack, no zero load cycles.
    expect((measures.cables as object[])[3]).toEqual({ cable: 4, meanTensionN: null, peakTensionN: null, slackS: null, nearLimitS: null, saturatedS: null, loadCycles: null, largestCycleN: null });
    expect(unsaid(measures)).toEqual([]);
  });

  test('a recording of times alone has nothing to measure, and says so of everything', async () => {
    const rows = table('session-a.csv.gz').slice(0, 4000).map(([t = '']) => [t, ...names.map(() => '')]);
    const { recording, flags, measures } = await analysed('--rig', rigOf('heron-8'), kept('times.csv', text(rows)));
    expect(recording).toMatchObject({ samples: 4000, rateHz: 1000, gaps: [] });
    expect(flags).toEqual([]);
    expect(measures).toMatchObject({ pathLengthM: null, sparc: null, meanTensionN: null, workJ: null });
    expect(unsaid(measures)).toEqual([]);
  });

  test('a clock that counts µs since 1970 keeps every digit: the same flags, so much later', async () => {
    const all = table('session-a.csv.gz').filter(([t]) => Number(t) < 12.2);
    const later = (t: number | string) => {
      const us = 1_764_600_000_123_456 + Math.round(Number(t) * 1000) * 1000;
      return `${String(us).slice(0, -6)}.${String(us).slice(-6)}`;
    };
    const [early, late] = await Promise.all([
      analysed('--rig', rigOf('heron-8'), kept('early.csv', text(all))),
      analysed('--rig', rigOf('heron-8'), kept('late.csv', text(all.map(([t = '', ...rest]) => [later(t), ...rest])))),
    ]);
    expect(early.flags.map(({ kind }) => kind)).toEqual(['slack', 'gap', 'gap', 'saturation', 'saturation']);
    const shifted = <T extends { start: number; end: number }>(spans: readonly T[]) => spans.map((span) => ({ ...span, start: Number(later(span.start)), end: Number(later(span.end)) }));
    expect(late.flags).toEqual(shifted(early.flags));
    expect(late.recording).toEqual({ ...early.recording, gaps: shifted(early.recording.gaps) });
  });

  test.each([
    ['inside a slack', 2.7, 2.75, 2.921],
    ['over the end of a slack, which then ends with the first sample after', 2.85, 3, 3],
  ])('a gap %s: one slack, one gap', async (_words, from, to, end) => {
    const rows = table('session-a.csv.gz').filter(([t]) => Number(t) < 4 && !(Number(t) >= from && Number(t) < to));
    const { flags } = await analysed('--rig', rigOf('heron-8'), kept(`gap-${from}.csv`, text(rows)));
    expect(flags).toMatchObject([{ kind: 'slack', cable: 4, start: 2.595, end }, { kind: 'gap', start: Math.round(1000 * from - 1) / 1000, end: to }]);
  });

  test('rules of a study replace the defaults; null turns a kind off', async () => {
    const rules = kept('rules.json', JSON.stringify({ format: 'tautbook.rules/1', saturation: null, slack: { onsetN: 0.2, releaseN: 0.4, minDurationS: 0.01, mergeGapS: 0 } }));
    const { flags } = await analysed('--rig', rigOf('heron-8'), '--rules', rules, recordingOf('session-a.csv.gz'));
    expect(flags.filter(({ kind }) => kind === 'saturation')).toEqual([]);
    const slack = flags.filter(({ kind }) => kind === 'slack');
    expect(slack.length).toBeGreaterThan(0);
    expect(slack.every(({ peak = NaN }) => peak < 0.2)).toBe(true);
    expect(flags.some(({ kind }) => kind === 'gap')).toBe(true);
  });

  test.each([['one sample', 1], ['three samples', 3]])('of %s it says what there is and what cannot be told', async (_words, count) => {
    const { recording, measures } = await analysed('--rig', rigOf('heron-8'), kept(`short-${count}.csv`, text(table('session-a.csv.gz').slice(0, count))));
    expect(recording).toMatchObject({ samples: count, rateHz: count === 1 ? null : 1000 });
    expect(measures.notMeasured.length).toBeGreaterThan(0);
    expect(unsaid(measures)).toEqual([]);
  });

  test('one sample, with a slack cable, makes up no time', async () => {
    const rows = table('session-a.csv.gz').filter(([t]) => t === '2.700');
    const { recording, flags, measures } = await analysed('--rig', rigOf('heron-8'), kept('moment.csv', text(rows)));
    expect(recording).toEqual({ samples: 1, duration: 0, rateHz: null, gaps: [] });
    expect(flags).toEqual([]);
    expect(measures.slackS).toBeLessThanOrEqual(1e-6);
    expect(measures.peakTensionN).toBeCloseTo(Math.max(...(rows[0] ?? []).slice(at('t1_N'), at('t8_N') + 1).map(Number)), 4);
  });

  test('a hand that stands still: no movement, no smoothness, no complaint', async () => {
    const [first = []] = table('session-a.csv.gz');
    const rows = Array.from({ length: 3000 }, (_, i) => [(i / 1000).toFixed(3), ...first.slice(1)]);
    const { flags, measures } = await analysed('--rig', rigOf('heron-8'), kept('still.csv', text(rows)));
    expect(flags).toEqual([]);
    expect(measures).toMatchObject({ pathLengthM: 0, movements: 0 });
    expect(unsaid(measures)).toEqual([]);
  });
});

describe('input at fault: lines on standard error, status 2, nothing on standard output', () => {
  const refused = async (args: string[], ...lines: (string | RegExp)[]) => {
    const { status, stdout, stderr } = await analyse(...args);
    expect({ status, stdout }).toEqual({ status: 2, stdout: '' });
    for (const line of lines) expect(stderr).toMatch(line);
    expect(stderr).not.toMatch(/\n\s+at /);
    return stderr;
  };
  const heron = ['--rig', rigOf('heron-8')];
  const few = () => table('session-a.csv.gz').slice(0, 100);

  test('a file that is not there, that is empty, or has a header alone', async () => {
    await refused([...heron, join(folder, 'nowhere.csv')], 'there is no such file');
    await refused([...heron, kept('empty.csv', '')], 'CSV_EMPTY');
    await refused([...heron, kept('header.csv', `${header}\n`)], 'CSV_EMPTY');
  });

  test('wrong columns, a time that does not rise, a word for a number: line, column, found and expected', async () => {
    await refused([...heron, kept('columns.csv', text(few()).replace('t3_N', 'tension3'))], /line 1, column 12: found "tension3", expected t3_N/);
    await refused([...heron, kept('time.csv', text([...few(), ...few().slice(-1)]))], /line 102, column 1: found "0\.099"/);
    await refused([...heron, kept('word.csv', text(few().map((row, i) => (i === 4 ? row.map((field, c) => (c === at('t2_N') ? 'taut' : field)) : row))))], /line 6, column 11: found "taut", expected a number/);
  });

  test('more than twenty faults: the first twenty', async () => {
    const stderr = await refused([...heron, kept('many.csv', text(few().map((row) => row.map((field, c) => (c === at('t2_N') ? 'inf' : field)))))]);
    expect(stderr.trimEnd().split('\n')).toHaveLength(20);
  });

  test('a recording of another rig: its cables do not fit', async () => {
    const rig = JSON.parse(readFileSync(rigOf('heron-8'), 'utf8')) as { cables: { exit: number[] }[] };
    const twelve = kept('twelve.json', JSON.stringify({ ...rig, cables: [...rig.cables, ...rig.cables.slice(0, 4).map((cable) => ({ ...cable, exit: cable.exit.map((part) => part * 0.9) }))] }));
    await refused(['--rig', twelve, recordingOf('session-a.csv.gz')], 't9_N');
  });

  test('gzip that breaks off, or is none', async () => {
    await refused([...heron, kept('cut.csv.gz', gzipSync(text(table('session-a.csv.gz').slice(0, 5000))).subarray(0, 3000))], /Z_BUF_ERROR|Z_DATA_ERROR/);
    await refused([...heron, kept('none.csv.gz', text(few()))], 'Z_DATA_ERROR');
  });

  test('a rig or rules with faults: each fault with its place', async () => {
    const rig = JSON.parse(readFileSync(rigOf('heron-8'), 'utf8')) as Record<string, unknown>;
    await refused(['--rig', kept('rig.json', JSON.stringify({ ...rig, tensionMax: -1 })), recordingOf('session-a.csv.gz')], 'tensionMax');
    await refused(['--rig', kept('notjson.json', '{'), recordingOf('session-a.csv.gz')], 'this is not JSON');
    const withRules = (rules: object) => [...heron, '--rules', kept(`rules-${Object.keys(rules).join('')}.json`, JSON.stringify({ format: 'tautbook.rules/1', ...rules })), recordingOf('session-a.csv.gz')];
    await refused(withRules({ slack: { onsetN: 0.5, releaseN: 0.3, minDurationS: 0.01, mergeGapS: 0 } }), 'releaseN must not lie below onsetN');
    await refused(withRules({ saturation: { onsetN: 24, releaseN: 23, minDurationS: 0, mergeGapS: 0 } }), 'A duration of zero');
  });

  test('arguments that say nothing, too much, or what there is not', async () => {
    await refused([], '--rig');
    expect(await throughNpm('--loud')).toEqual(await analyse('--loud'));
    await refused(heron, 'a recording');
    await refused([...heron, '--loud', recordingOf('session-a.csv.gz')], 'loud');
    await refused([...heron, 'one.csv', 'two.csv'], 'one recording');
  });
});

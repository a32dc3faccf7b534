/** What `calc` answers to input that has no answer: a code and a sentence, never a silent null. */
import { beforeAll, describe, expect, it } from 'vitest';
import { calc, runCalc, type CalcAnswer } from './run-calc';

const zeros = (n: number): number[] => new Array<number>(n).fill(0);
const line: [number, number, number][] = [0, 1, 2, 5].map((k) => [0.1 + 0.03 * k, 0.2 - 0.07 * k, 0.01 * k]);
const octahedron: [number, number, number][] = [[1, 0, 0], [-1, 0, 0], [0, 1, 0], [0, -1, 0], [0, 0, 1], [0, 0, -1]];
const workload = { mental: 1, physical: 2, temporal: 3, performance: 4, effort: 5, frustration: 6 };

const refused: readonly (readonly [what: string, code: string, request: Record<string, unknown>])[] = [
  ['an unknown call', 'BAD_REQUEST', { call: 'stats.magic' }],
  ['a name that every object has', 'BAD_REQUEST', { call: 'toString' }],
  ['a missing field', 'BAD_REQUEST', { call: 'stats.pairedT', a: [1, 2] }],
  ['a null among numbers', 'BAD_REQUEST', { call: 'stats.holm', p: [0.1, null] }],
  ['a text for a number', 'BAD_REQUEST', { call: 'signal.lowpass', order: '2', fc: 5, fs: 100, x: zeros(50) }],
  ['lists of different length', 'BAD_REQUEST', { call: 'stats.pairedT', a: [1, 2, 3], b: [1, 2] }],
  ['no pairs', 'TOO_SHORT', { call: 'stats.pairedT', a: [], b: [] }],
  ['one pair', 'TOO_SHORT', { call: 'stats.pairedT', a: [1], b: [2] }],
  ['pairs that all differ alike', 'UNDEFINED', { call: 'stats.pairedT', a: [1.1, 2.1, 3.1], b: [1, 2, 3] }],
  ['no differences', 'TOO_SHORT', { call: 'stats.wilcoxon', d: [] }],
  ['differences that are all zero', 'UNDEFINED', { call: 'stats.wilcoxon', d: [0, 0, 0], method: 'exact' }],
  ['a method that is none', 'BAD_REQUEST', { call: 'stats.wilcoxon', d: [1], method: 'bayes' }],
  ['raters with one category', 'UNDEFINED', { call: 'stats.kappa', table: [[9, 0], [0, 0]] }],
  ['an empty agreement table', 'TOO_SHORT', { call: 'stats.kappa', table: [] }],
  ['an agreement table of zeros', 'TOO_SHORT', { call: 'stats.kappa', table: [[0, 0], [0, 0]] }],
  ['a table that is not square', 'BAD_REQUEST', { call: 'stats.kappa', table: [[1, 2, 3], [4, 5, 6]] }],
  ['a negative count', 'BAD_REQUEST', { call: 'stats.kappa', table: [[1, -2], [3, 4]] }],
  ['equal ratings throughout', 'UNDEFINED', { call: 'stats.icc', ratings: [[0.1, 0.1, 0.1], [0.1, 0.1, 0.1]] }],
  ['one target', 'TOO_SHORT', { call: 'stats.icc', ratings: [[1, 2, 3]] }],
  ['one judge', 'TOO_SHORT', { call: 'stats.icc', ratings: [[1], [2]] }],
  ['no ratings', 'TOO_SHORT', { call: 'stats.icc', ratings: [] }],
  ['ratings with a hole', 'BAD_REQUEST', { call: 'stats.icc', ratings: [[1, 2], [3]] }],
  ['one pair for limits of agreement', 'TOO_SHORT', { call: 'stats.blandAltman', a: [1], b: [1] }],
  ['no p values', 'TOO_SHORT', { call: 'stats.holm', p: [] }],
  ['a p above 1', 'BAD_REQUEST', { call: 'stats.holm', p: [0.5, 1.5] }],
  ['a square of no conditions', 'BAD_REQUEST', { call: 'design.williams', n: 0 }],
  ['a square of two and a half conditions', 'BAD_REQUEST', { call: 'design.williams', n: 2.5 }],
  ['a filter for an empty signal', 'TOO_SHORT', { call: 'signal.lowpass', order: 2, fc: 5, fs: 100, x: [] }],
  ['a filter for a signal shorter than its ends', 'TOO_SHORT', { call: 'signal.lowpass', order: 2, fc: 5, fs: 100, x: zeros(9) }],
  ['a corner above half the rate', 'BAD_REQUEST', { call: 'signal.lowpass', order: 2, fc: 60, fs: 100, x: zeros(50) }],
  ['an order of zero', 'BAD_REQUEST', { call: 'signal.lowpass', order: 0, fc: 5, fs: 100, x: zeros(50) }],
  ['a spectrum of an empty signal', 'TOO_SHORT', { call: 'signal.welch', x: [], fs: 100, nperseg: 64 }],
  ['a segment longer than the signal', 'TOO_SHORT', { call: 'signal.welch', x: zeros(100), fs: 100, nperseg: 1e9 }],
  ['a band without bins', 'UNDEFINED', { call: 'signal.welch', x: zeros(100), fs: 100, nperseg: 64, band: [8.1, 8.2] }],
  ['a band upside down', 'BAD_REQUEST', { call: 'signal.welch', x: zeros(100), fs: 100, nperseg: 64, band: [12, 8] }],
  ['a rate of zero', 'BAD_REQUEST', { call: 'signal.welch', x: zeros(100), fs: 0, nperseg: 64 }],
  ['no speed', 'TOO_SHORT', { call: 'motion.speed', speed: [], fs: 100 }],
  ['one speed', 'TOO_SHORT', { call: 'motion.speed', speed: [1], fs: 100 }],
  ['a hand that stood still', 'UNDEFINED', { call: 'motion.speed', speed: zeros(100), fs: 100 }],
  ['a speed that never changed', 'UNDEFINED', { call: 'motion.speed', speed: zeros(100).map(() => 0.3), fs: 100 }],
  ['one point', 'TOO_SHORT', { call: 'motion.path', points: [[0, 0, 0]], fs: 100 }],
  ['a path that ends where it began', 'UNDEFINED', { call: 'motion.path', points: [[0, 0, 0], [1, 0, 0], [0, 0, 0]], fs: 100 }],
  ['points of two sizes', 'BAD_REQUEST', { call: 'motion.path', points: [[0, 0, 0], [1, 0]], fs: 100 }],
  ['a port without samples', 'TOO_SHORT', { call: 'motion.passivity', f: [], v: [], dt: 0.001, e0: 0 }],
  ['a port with unequal columns', 'BAD_REQUEST', { call: 'motion.passivity', f: [[1, 2]], v: [[1]], dt: 0.001, e0: 0 }],
  ['a period of zero', 'BAD_REQUEST', { call: 'motion.passivity', f: [[1]], v: [[1]], dt: 0, e0: 0 }],
  ['no load', 'TOO_SHORT', { call: 'fatigue.rainflow', series: [] }],
  ['one load', 'TOO_SHORT', { call: 'fatigue.rainflow', series: [4] }],
  ['a missing rating', 'UNDEFINED', { call: 'instrument.workload', subscales: { ...workload, effort: null } }],
  ['a rating of something else', 'BAD_REQUEST', { call: 'instrument.workload', subscales: { ...workload, mood: 50 } }],
  ['weights and pairs at odds', 'UNDEFINED', { call: 'instrument.workload', subscales: workload, pairs: [], weights: workload }],
  ['no answers', 'UNDEFINED', { call: 'instrument.usability', answers: new Array<null>(10).fill(null) }],
  ['nine answers', 'BAD_REQUEST', { call: 'instrument.usability', answers: new Array<number>(9).fill(3) }],
  ['a quaternion of norm 2', 'BAD_REQUEST', { call: 'rotation.convert', q: [0, 0, 0, 2] }],
  ['a quaternion of norm 0', 'BAD_REQUEST', { call: 'rotation.angle', qa: [0, 0, 0, 0], qb: [0, 0, 0, 1] }],
  ['a quaternion of three', 'BAD_REQUEST', { call: 'rotation.slerp', qa: [0, 0, 0], qb: [0, 0, 0, 1], s: [0] }],
  ['one point', 'TOO_SHORT', { call: 'register.points', from: [[0, 0, 0]], to: [[1, 1, 1]], scaled: false }],
  ['two points', 'TOO_SHORT', { call: 'register.points', from: [[0, 0, 0], [1, 0, 0]], to: [[1, 1, 1], [1, 2, 1]], scaled: true }],
  ['points on a line', 'SINGULAR', { call: 'register.points', from: line, to: line.map(([x, y, z]) => [y, z, x]), scaled: false }],
  ['points in one place', 'SINGULAR', { call: 'register.points', from: line, to: line.map(() => [1, 2, 3]), scaled: true }],
  ['a mirror image without a preference', 'SINGULAR', { call: 'register.points', from: octahedron, to: octahedron.map(([x, y, z]) => [-x, -y, -z]), scaled: false }],
  ['points without partners', 'BAD_REQUEST', { call: 'register.points', from: line, to: line.slice(1), scaled: false }],
  ['points in the plane', 'BAD_REQUEST', { call: 'register.points', from: [[0, 0]], to: [[0, 0]], scaled: false }],
  ['no orientations', 'TOO_SHORT', { call: 'register.orientations', from: [], to: [] }],
  ['an orientation of norm 3', 'BAD_REQUEST', { call: 'register.orientations', from: [[0, 0, 0, 3]], to: [[0, 0, 0, 1]] }],
  ['orientations a half turn at odds', 'UNDEFINED', { call: 'register.orientations', from: [[0, 0, 0, 1], [0, 0, 0, 1]], to: [[0, 0, 0, 1], [1, 0, 0, 0]] }],
  ['a lag longer than the signals', 'TOO_SHORT', { call: 'register.timeOffset', dt: 0.01, maxLag: 10, a: [1, 2, 3], b: [1, 2, 3] }],
  ['signals that stand still', 'UNDEFINED', { call: 'register.timeOffset', dt: 0.01, maxLag: 2, a: zeros(20).fill(0.1), b: zeros(20).map((_, i) => Math.sin(i)) }],
  ['a lag of half a sample', 'BAD_REQUEST', { call: 'register.timeOffset', dt: 0.01, maxLag: 0.5, a: zeros(9), b: zeros(9) }],
  ['a period below zero', 'BAD_REQUEST', { call: 'register.timeOffset', dt: -1, maxLag: 1, a: zeros(9), b: zeros(9) }],
  ['no poses to compare', 'TOO_SHORT', { call: 'error.pose', reference: [], measured: [], qReference: [], qMeasured: [] }],
  ['orientations on one side only', 'BAD_REQUEST', { call: 'error.pose', reference: [[0, 0, 0]], measured: [[0, 0, 0]], qReference: [[0, 0, 0, 1]] }],
  ['one approach', 'TOO_SHORT', { call: 'error.repeatability', command: [0, 0, 0], attained: [[0, 0, 1]] }],
  ['a rig that is none', 'BAD_RIG', { call: 'rig.structure', rig: {}, pose: { p: [0, 0, 0], q: [0, 0, 0, 1], grasp: 0 } }],
];

describe('refusals of calc', () => {
  let answers: CalcAnswer[] = [];
  beforeAll(async () => {
    answers = await calc(refused.map(([, , request]) => request));
  });

  it.each(refused.map(([what, code], i) => [what, code, i] as const))('%s: %s', (_what, code, i) => {
    const answer = answers[i];
    expect(answer).toMatchObject({ ok: false, error: { code } });
    expect(answer?.ok === false && answer.error.message.length).toBeGreaterThan(10);
  });
});

describe('values that say so', () => {
  it('a level load has no cycles, agreement without spread has limits on the bias, and so on', async () => {
    const answers = await calc([
      { call: 'fatigue.rainflow', series: [3, 3, 3] },
      { call: 'stats.blandAltman', a: [2, 3, 4], b: [1, 2, 3] },
      { call: 'stats.kappa', table: [[5, 0], [0, 7]] },
      { call: 'rig.check', rig: {} },
      { call: 'rotation.convert', q: [0, 0, 0, 1.0000000001] },
      { call: 'instrument.workload', subscales: workload },
      { call: 'signal.lowpass', order: 1, fc: 5, fs: 100 },
      { call: 'stats.wilcoxon', d: [1, 1, -1, 2, 0], method: 'exact' },
      { call: 'signal.welch', x: zeros(600), fs: 100 },
    ]);
    expect(answers[0]).toEqual({ ok: true, value: [] });
    expect(answers[1]).toMatchObject({ ok: true, value: { bias: 1, sd: 0, lower: 1, upper: 1 } });
    expect(answers[2]).toMatchObject({ ok: true, value: { kappa: 1, kappaLinear: 1, kappaQuadratic: 1 } });
    expect(answers[3]).toMatchObject({ ok: true, value: { faults: expect.arrayContaining([expect.objectContaining({ code: 'FORMAT' })]) as unknown } });
    expect(answers[4]).toMatchObject({ ok: true, value: { rotvec: [0, 0, 0] } });
    expect(answers[5]).toEqual({ ok: true, value: { raw: 3.5 } });
    expect(answers[6]).toMatchObject({ ok: true });
    // By hand: ranks 2, 2, 2, 4; sums of at most 2 come from 4 of 16 sign patterns (none, or one of the twos); doubled.
    expect(answers[7]).toMatchObject({ ok: true, value: { W: 2, n: 4, zerosDropped: 1, ties: true, p: 0.5 } });
    expect(answers[8]).toMatchObject({ ok: true, value: { bandPower: 0 } });
  });

  it('refuses a number too large for a double', async () => {
    const run = await runCalc('{ "call": "stats.holm", "p": [1e999] }');
    expect(run.status).toBe(0);
    expect(JSON.parse(run.stdout)).toMatchObject({ ok: false, error: { code: 'BAD_REQUEST' } });
  });
});

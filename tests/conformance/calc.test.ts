/** Every case of every reference file, through the `calc` command as another program runs it. Tolerances are the files' own. */
import { readFileSync } from 'node:fs';
import { beforeAll, describe, expect, it } from 'vitest';
import { rigFileSchema } from '@shared/rig';
import { reference } from './rig-reference';
import { calc, runCalc, type CalcAnswer } from './run-calc';

type Json = Record<string, unknown>;
interface Check {
  readonly call: string;
  readonly request: Json;
  /** Field of the value, what it should be, and how far off it may be: in its own unit, or as a share of the value. */
  readonly expected: readonly (readonly [field: string, value: unknown, absolute: number, relative?: number])[];
}

const rigFile = (code: unknown): unknown =>
  typeof code === 'string'
    ? rigFileSchema.parse(JSON.parse(readFileSync(new URL(`../../samples/rigs/${code}.json`, import.meta.url), 'utf8')))
    : code;

const cases = (file: string): Json[] => reference<{ cases: Json[] }>(file).cases;
const ofKind = (file: string, kind: string): Json[] => cases(file).filter((one) => one['kind'] === kind);

/** Largest difference beyond what is allowed, over a number or lists of numbers; 0 when all is within. */
function excess(actual: unknown, wanted: unknown, absolute: number, relative: number): number {
  if (Array.isArray(wanted)) {
    if (!Array.isArray(actual) || actual.length !== wanted.length) return Infinity;
    return wanted.reduce((worst: number, value, i) => Math.max(worst, excess(actual[i], value, absolute, relative)), 0);
  }
  if (typeof wanted !== 'number') return JSON.stringify(actual) === JSON.stringify(wanted) ? 0 : Infinity;
  if (typeof actual !== 'number') return Infinity;
  return Math.max(0, Math.abs(actual - wanted) - absolute - relative * Math.abs(wanted));
}

function field(value: unknown, path: string): unknown {
  return path.split('.').reduce((inner: unknown, key) => (inner as Json | undefined)?.[key], value);
}

function pick(from: Json, ...names: string[]): Json {
  return Object.fromEntries(names.filter((name) => name in from).map((name) => [name, from[name]]));
}

function same(one: Json, names: string[], absolute: number, relative = 0): Check['expected'] {
  return names.map((name) => [name, one[name], absolute, relative] as const);
}

/** A rotation is right when its quaternion is, up to the sign that half turns leave open. */
const halfTurn = (q: unknown): boolean => Math.abs((q as number[])[3] as number) < 1e-9;

const files: Record<string, () => Check[]> = {
  kinematics: () => [
    ...cases('kinematics').map((one) => ({
      call: 'rig.structure',
      request: { rig: rigFile(one['rig']), pose: one['pose'] },
      expected: [
        ...same(one, ['rank', 'closure'], 0),
        ...same(one, ['lengths', 'A'], 1e-12),
        ...same(one, ['n'], 1e-9),
        ...same(one, ['closureIndex'], 1e-8),
      ],
    })),
    ...reference<{ degenerate: Json[] }>('kinematics').degenerate.map((one) => ({
      call: 'rig.structure',
      request: pick(one, 'rig', 'pose'),
      expected: [...same(one, ['rank', 'closure'], 0), ['n', null, 0] as const],
    })),
  ],
  statics: () => [
    ...cases('statics').map((one) => ({
      call: 'rig.tensions',
      request: { ...pick(one, 'pose', 'wrench', 'tensionMin', 'tensionMax'), rig: rigFile(one['rig']) },
      expected:
        one['feasible'] === true ? [...same(one, ['feasible', 'activeLimits'], 0), ...same(one, ['tensions'], 1e-8)] : same(one, ['feasible'], 0),
    })),
    ...cases('statics')
      .filter((one) => one['feasible'] === true)
      .map((one) => ({
        call: 'rig.wrench',
        request: { ...pick(one, 'pose', 'tensions'), rig: rigFile(one['rig']) },
        expected: same(one, ['wrench'], 1e-9),
      })),
  ],
  velocity: () =>
    cases('velocity').map((one) => ({
      call: 'rig.rates',
      request: { ...pick(one, 'pose', 'twist'), rig: rigFile(one['rig']) },
      expected: same(one, ['lengthRates'], 1e-11),
    })),
  forward: () =>
    // Case 22's published pose is no minimum; rig-reference.test.ts shows it and checks the true one.
    cases('forward').filter((_, k) => k !== 22).map((one) => {
      const pose = one['pose'] as Json;
      return {
        call: 'rig.forward',
        request: { ...pick(one, 'lengths', 'start'), rig: rigFile(one['rig']) },
        expected: [
          ['converged', true, 0],
          ['pose.p', pose['p'], 1e-9],
          ['pose.q', pose['q'], 1e-8],
          ['pose.grasp', pose['grasp'], 1e-8],
          ['residualRms', one['residualRms'], 1e-9],
        ],
      };
    }),
  quaternion: () => [
    ...ofKind('quaternion', 'convert').map((one) => ({
      call: 'rotation.convert',
      request: pick(one, 'q'),
      expected: same(one, halfTurn(one['q']) ? ['matrix'] : ['matrix', 'eulerZYX', 'rotvec'], 1e-10),
    })),
    ...ofKind('quaternion', 'gimbal').map((one) => ({
      call: 'rotation.convert',
      request: pick(one, 'q'),
      expected: [...same(one, ['matrix'], 1e-10), ['eulerZYX.1', one['pitch'], 1e-7] as const],
    })),
    ...ofKind('quaternion', 'slerp').map((one) => ({
      call: 'rotation.slerp',
      request: pick(one, 'qa', 'qb', 's'),
      expected: same(one, ['q'], 1e-10),
    })),
    ...ofKind('quaternion', 'compose').map((one) => ({
      call: 'rotation.angle',
      request: pick(one, 'qa', 'qb'),
      expected: [['angle', one['angleAB'], 1e-9]] as const,
    })),
  ],
  registration: () => [
    ...ofKind('registration', 'points').map((one) => ({
      call: 'register.points',
      request: pick(one, 'from', 'to', 'scaled'),
      expected: [...same(one, ['rotation', 'q', 'translation'], 1e-8), ...same(one, ['scale', 'rmsResidual'], 1e-9)],
    })),
    ...ofKind('registration', 'orientations').map((one) => ({
      call: 'register.orientations',
      request: pick(one, 'from', 'to'),
      expected: same(one, ['q', 'rmsAngle', 'maxAngle'], 1e-8),
    })),
    ...ofKind('registration', 'timeOffset').map((one) => ({
      call: 'register.timeOffset',
      request: pick(one, 'dt', 'maxLag', 'a', 'b'),
      expected: [
        ...same(one, ['lagSamples'], 0),
        ...same(one, ['offset'], 1e-7),
        ...same(one, ['peakCorrelation'], 1e-9),
        ['offset', one['trueOffset'], (one['dt'] as number) / 2] as const,
      ],
    })),
  ],
  poseError: () => [
    ...ofKind('poseError', 'errors').map((one) => {
      const parts = ['mean', 'rms', 'max', 'p95'];
      return {
        call: 'error.pose',
        request: pick(one, 'reference', 'measured', 'qReference', 'qMeasured'),
        expected: [
          ...parts.map((part) => [`position.${part}`, (one['position'] as Json)[part], 1e-12] as const),
          ...parts.map((part) => [`rotation.${part}`, (one['rotation'] as Json)[part], 1e-7] as const),
        ],
      };
    }),
    ...ofKind('poseError', 'angle').map((one) => ({
      call: 'rotation.angle',
      request: pick(one, 'qa', 'qb'),
      expected: same(one, ['angle'], 1e-7),
    })),
    ...ofKind('poseError', 'repeatability').map((one) => ({
      call: 'error.repeatability',
      request: pick(one, 'command', 'attained'),
      expected: same(one, ['ap', 'lBar', 'sL', 'rp'], 1e-12),
    })),
  ],
  smoothness: () => [
    ...ofKind('smoothness', 'speed').map((one) => ({
      call: 'motion.speed',
      request: pick(one, 'speed', 'fs'),
      expected: [...same(one, ['sparc'], 1e-8), ...same(one, ['ldlj'], 1e-7), ...same(one, ['peakSpeed'], 1e-12)],
    })),
    ...ofKind('smoothness', 'path').map((one) => ({
      call: 'motion.path',
      request: pick(one, 'points', 'fs'),
      expected: same(one, ['pathLength', 'straightLine', 'pathRatio', 'peakSegmentSpeed'], 1e-10),
    })),
  ],
  passivity: () =>
    cases('passivity').map((one) => ({
      call: 'motion.passivity',
      request: pick(one, 'f', 'v', 'dt', 'e0'),
      expected: [
        ...same(one, ['passive', 'firstNegativeIndex', 'minIndex'], 0),
        ...same(one, ['minEnergy', 'finalEnergy', 'firstNegativeTime', 'minTime'], 1e-10),
      ],
    })),
  filters: () => [
    ...ofKind('filters', 'butterLowpass').map((one) => ({
      call: 'signal.lowpass',
      request: pick(one, 'order', 'fc', 'fs', 'x'),
      expected: [...same(one, ['b', 'a'], 0, 1e-9), ...same(one, ['filtfilt'], 1e-6)],
    })),
    ...ofKind('filters', 'welch').map((one) => ({
      call: 'signal.welch',
      request: pick(one, 'x', 'fs', 'nperseg', 'band'),
      expected: same(one, ['f', 'psd', 'bandPower'], 0, 1e-9),
    })),
  ],
  stats: () => [
    ...ofKind('stats', 'pairedT').map((one) => ({
      call: 'stats.pairedT',
      request: pick(one, 'a', 'b'),
      expected: [...same(one, ['t', 'df', 'meanDiff', 'sdDiff', 'cohenDz', 'ci95'], 0, 1e-9), ...same(one, ['p'], 1e-9)],
    })),
    ...(['exact', 'normal'] as const).flatMap((method) =>
      ofKind('stats', method === 'exact' ? 'wilcoxonExact' : 'wilcoxonNormal').map((one) => ({
        call: 'stats.wilcoxon',
        request: { ...pick(one, 'd', 'continuityCorrection'), method },
        expected: [
          ...same(one, method === 'exact' ? ['W', 'wPlus', 'n'] : ['W', 'wPlus', 'n', 'zerosDropped', 'ties', 'z'], 0, 1e-9),
          ...same(one, ['p'], 1e-9),
        ],
      })),
    ),
    ...ofKind('stats', 'kappa').map((one) => ({
      call: 'stats.kappa',
      request: pick(one, 'table'),
      expected: same(one, ['po', 'pe', 'kappa', 'kappaLinear', 'kappaQuadratic'], 0, 1e-9),
    })),
    ...ofKind('stats', 'icc').map((one) => ({
      call: 'stats.icc',
      request: pick(one, 'ratings'),
      expected: same(one, ['BMS', 'JMS', 'EMS', 'WMS', 'icc11', 'icc21', 'icc31'], 0, 1e-9),
    })),
    ...ofKind('stats', 'blandAltman').map((one) => ({
      call: 'stats.blandAltman',
      request: pick(one, 'a', 'b'),
      expected: same(one, ['bias', 'sd', 'lower', 'upper'], 0, 1e-9),
    })),
    ...ofKind('stats', 'holm').map((one) => ({
      call: 'stats.holm',
      request: pick(one, 'p'),
      expected: same(one, ['adjusted'], 0, 1e-9),
    })),
    ...ofKind('stats', 'williams').map((one) => ({
      call: 'design.williams',
      request: pick(one, 'n'),
      expected: [['rows.length', one['rows'], 0]] as const,
    })),
  ],
  questionnaires: () => [
    ...ofKind('questionnaires', 'workload').flatMap((one) =>
      [pick(one, 'subscales', 'pairs'), pick(one, 'subscales', 'weights')].map((request) => ({
        call: 'instrument.workload',
        request,
        expected: same(one, ['raw', 'weighted', 'weights'], 1e-9),
      })),
    ),
    ...ofKind('questionnaires', 'usability').map((one) => ({
      call: 'instrument.usability',
      request: pick(one, 'answers'),
      expected: same(one, ['score'], 1e-9),
    })),
    ...ofKind('questionnaires', 'throughput').map((one) => ({
      call: 'instrument.throughput',
      request: pick(one, 'D', 'W', 'from', 'target', 'starts', 'selections', 'movementTimes'),
      expected: same(
        one,
        ['meanMT', 'idNominal', 'throughputNominal', 'sdAlongAxis', 'effectiveWidth', 'effectiveDistance', 'idEffective', 'throughputEffective'],
        1e-9,
      ),
    })),
  ],
};

describe.each(Object.entries(files))('calc on %s.json', (_file, makeChecks) => {
  const checks = makeChecks();
  let answers: CalcAnswer[] = [];
  beforeAll(async () => {
    answers = await calc(checks.map(({ call, request }) => ({ call, ...request })));
  });

  it('answers every case', () => {
    expect(checks.length).toBeGreaterThan(0);
    expect(answers.map((answer) => answer.ok)).toEqual(checks.map(() => true));
  });

  it('is within the tolerance of the file', () => {
    const off = checks.flatMap(({ call, expected }, i) => {
      const answer = answers[i];
      if (answer?.ok !== true) return [`case ${i}: refused`];
      return expected
        .map(([path, wanted, absolute, relative]) => ({ path, beyond: excess(field(answer.value, path), wanted, absolute, relative ?? 0) }))
        .filter(({ beyond }) => beyond > 0)
        .map(({ path, beyond }) => `case ${i}, ${call}, ${path}: ${beyond} beyond the tolerance`);
    });
    expect(off).toEqual([]);
  });
});

describe('calc as a command', () => {
  it('answers one request with one result', async () => {
    const run = await runCalc('{ "call": "instrument.usability", "answers": [3, 3, 3, 3, 3, 3, 3, 3, 3, 3] }');
    expect(run).toMatchObject({ status: 0, stderr: '' });
    expect(JSON.parse(run.stdout)).toMatchObject({ ok: true, value: { score: 50 } });
  });

  it('answers a list with a list, refusals among them, with status 0', async () => {
    const run = await runCalc('[{ "call": "no.such" }, { "call": "design.williams", "n": 2 }]');
    expect(run.status).toBe(0);
    expect(JSON.parse(run.stdout)).toMatchObject([
      { ok: false, error: { code: 'BAD_REQUEST' } },
      { ok: true, value: { rows: [[0, 1], [1, 0]] } },
    ]);
  });

  it('answers an empty list with an empty list', async () => {
    expect(await runCalc('[]')).toMatchObject({ status: 0, stdout: '[]\n' });
  });

  it.each(['', 'not json', '42', 'null', '"stats.holm"', '{ "cal": "stats.holm" }', '[1, 2]'])(
    'ends with status 2 and nothing on standard output for %j',
    async (input) => {
      const run = await runCalc(input);
      expect(run.status).toBe(2);
      expect(run.stdout).toBe('');
      expect(run.stderr).not.toBe('');
    },
  );
});

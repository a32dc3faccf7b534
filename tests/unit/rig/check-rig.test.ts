/** What is said about a rig file that is none: a code, the place, and a sentence a mechanic can act on. */
import { describe, expect, it } from 'vitest';
import { checkRig, NumericError, parseRig, type RigFaultCode, type RigFile } from '@shared/rig';
import { outcome, rigFile, SAMPLE_RIGS } from './rig-builders';

const changed = (change: (file: RigFile) => void): RigFile => {
  const file = rigFile('heron-8');
  change(file);
  return file;
};
const motionOf = (file: RigFile, body: number) => file.bodies[body]!.motion!;

const faults: readonly (readonly [what: string, code: RigFaultCode, path: string, words: RegExp, file: unknown])[] = [
  ['nothing', 'TYPE', '', /object/, null],
  ['another format', 'FORMAT', 'format', /tautbook\.rig\/1/, { ...rigFile('heron-8'), format: 'tautbook.rig/2' }],
  ['no limits', 'MISSING', 'tensionMax', /missing/, changed((file) => delete (file as Partial<RigFile>).tensionMax)],
  ['a mistyped field', 'UNKNOWN_FIELD', 'bodies.1.motoin', /motoin/, changed((file) => ((file.bodies[1] as unknown as Record<string, unknown>)['motoin'] = {}))],
  ['a text for a number', 'TYPE', 'cables.2.exit.1', /number/, changed((file) => ((file.cables[2]!.exit as unknown[])[1] = '0.3'))],
  ['a position without its third axis', 'TYPE', 'cables.7.exit', /^exit of cable 8 needs at least 3 entries\.$/, changed((file) => (file.cables[7]!.exit as number[]).pop())],
  ['a grasp of no known kind', 'TYPE', 'grasp.kind', /slide or hinge/, changed((file) => ((file.grasp as { kind: string }).kind = 'twist'))],
  ['a position that is not a number', 'TYPE', 'home.p.0', /number/, changed((file) => (file.home.p[0] = Number.NaN))],
  ['an axis that is no unit vector', 'AXIS_NOT_UNIT', 'bodies.1.motion.axis', /jawA.*1\.41/, changed((file) => (motionOf(file, 1).axis = [1, 1, 0]))],
  ['an axis of no length', 'AXIS_NOT_UNIT', 'bodies.1.motion.axis', /length 0/, changed((file) => (motionOf(file, 1).axis = [0, 0, 0]))],
  ['two bodies of one name', 'BODY_TWICE', 'bodies.2.name', /jawA/, changed((file) => (file.bodies[2]!.name = 'jawA'))],
  ['an attachment on nothing', 'BODY_UNKNOWN', 'cables.4.body', /Cable 5.*thumb/, changed((file) => (file.cables[4]!.body = 'thumb'))],
  ['seven cables', 'TOO_FEW_CABLES', 'cables', /8.*7/, changed((file) => file.cables.pop())],
  ['a cable twice', 'CABLE_TWICE', 'cables.7', /8 repeats cable 1/, changed((file) => (file.cables[7] = structuredClone(file.cables[0]!)))],
  ['limits upside down', 'LIMITS_ORDER', 'tensionMax', /above tensionMin/, changed((file) => (file.tensionMin = 30))],
  ['slack above the least tension', 'LIMITS_ORDER', 'slackBelow', /at or below tensionMin/, changed((file) => (file.slackBelow = 2))],
  ['a negative slack', 'NEGATIVE', 'slackBelow', /below zero/, changed((file) => (file.slackBelow = -1))],
  ['a cable without stiffness', 'NEGATIVE', 'axialStiffness', /above zero/, changed((file) => (file.axialStiffness = 0))],
  ['a grasp without travel', 'LIMITS_ORDER', 'grasp.max', /grasp/, changed((file) => (file.grasp.max = file.grasp.min))],
  ['a frame inside out', 'LIMITS_ORDER', 'frame.max.2', /along z/, changed((file) => (file.frame.max[2] = -9))],
  ['a home that is turned by no rotation', 'QUATERNION_NOT_UNIT', 'home.q', /norm 1\.1/, changed((file) => (file.home.q = [0, 0, 0, 1.1]))],
  ['a home outside the frame', 'HOME_OUTSIDE', 'home.p.1', /along y/, changed((file) => (file.home.p[1] = 3))],
  ['a home beyond the grasp', 'HOME_OUTSIDE', 'home.grasp', /range/, changed((file) => (file.home.grasp = 1))],
  ['a cable that ends where it begins', 'ZERO_LENGTH_CABLE', 'cables.0', /Cable 1 has no length/, changed((file) => (file.cables[0] = { exit: [0.01, 0, 0], attach: [0.01, 0, 0], body: 'palm' }))],
  ['jaws that do not move', 'RANK_AT_HOME', '', /6 of 7/, changed((file) => file.bodies.forEach((body) => body.motion && (body.motion.ratio = 0)))],
];

describe('a rig file', () => {
  it.each(SAMPLE_RIGS)('%s is sound', (code) => {
    expect(checkRig(rigFile(code))).toEqual([]);
  });

  it.each(faults)('%s: %s at "%s"', (_what, code, path, words, file) => {
    const found = checkRig(file);
    expect(found).toContainEqual({ code, path, message: expect.stringMatching(words) as string });
    found.forEach(({ message }) => expect(message).toMatch(/\.$/));
  });

  it('tells every fault at once, and the parser names the first and how many more', () => {
    const file = changed((one) => {
      one.cables[4]!.body = 'thumb';
      one.tensionMin = 30;
      one.home.grasp = 1;
    });
    expect(checkRig(file).map(({ code }) => code)).toEqual(['BODY_UNKNOWN', 'LIMITS_ORDER', 'HOME_OUTSIDE']);
    expect(() => parseRig(file)).toThrowError(NumericError);
    expect(() => parseRig(file)).toThrowError(/BODY_UNKNOWN at cables\.4\.body.*2 more/);
  });

  it('with a fault of home alone still has kinematics, so that one can find out why', () => {
    const stiff = changed((file) => file.bodies.forEach((body) => body.motion && (body.motion.ratio = 0)));
    expect(outcome(() => parseRig(stiff).cableCount)).toBe(8);
  });
});
